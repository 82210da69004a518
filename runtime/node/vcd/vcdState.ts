import { writeBits } from '../../rowBits.js';
import { IdTable } from './idTable.js';
import type { VcdPart } from './vcdPorts.js';

const ZERO = 0x30;
const ONE = 0x31;

/** The values of the ports while a value change dump goes by, with x and z as unknown. */
export class VcdState {
  readonly values: Uint32Array;
  /** 1 for each bit that is x or z; it is then 0 in `values`. */
  readonly unknown: Uint32Array;
  /** The clock: 0, 1, or undefined where it has not been known yet. */
  clock: 0 | 1 | undefined;
  readonly #ids = new IdTable();
  readonly #targets: (VcdPart & { readonly isClock: boolean })[][] = [];

  /** For rows of `words` words. All is unknown at first. */
  constructor(words: number) {
    this.values = new Uint32Array(words);
    this.unknown = new Uint32Array(words);
  }

  /** Lets a variable drive bits of the row, or the clock. */
  connect(part: VcdPart, isClock: boolean): void {
    const number = this.#ids.get(new TextEncoder().encode(part.id), 0, part.id.length);
    const target = { ...part, isClock };
    if (number >= 0) {
      this.#targets[number]!.push(target);
    } else {
      this.#ids.set(part.id, this.#targets.length);
      this.#targets.push([target]);
    }
    if (isClock) return;
    for (let bit = 0; bit < part.width; bit++) writeBits(this.unknown, 0, part.offset + bit, 1, 1);
  }

  /** The number of an identifier code; -1 where it drives nothing. */
  find(bytes: Uint8Array, start: number, end: number): number {
    return this.#ids.get(bytes, start, end);
  }

  /** Gives a variable the value whose digits are `bytes[start … end-1]`; false where they are none. */
  set(number: number, bytes: Uint8Array, start: number, end: number): boolean {
    for (const { isClock, offset, width } of this.#targets[number]!) {
      if (isClock) {
        if (!this.#setClock(bytes[end - 1 - offset] ?? ZERO)) return false;
      } else if (!this.#setBits(offset, width, bytes, start, end)) return false;
    }
    return true;
  }

  // Missing digits on the left repeat the leftmost, but 0 for 1 (IEEE 1364-2005, 18.2.2).
  #setBits(offset: number, width: number, bytes: Uint8Array, start: number, end: number): boolean {
    const left = bytes[start]! === ONE ? ZERO : bytes[start]!;
    for (let bit = 0; bit < width; bit += 32) {
      const count = Math.min(32, width - bit);
      let value = 0;
      let unknown = 0;
      for (let i = 0; i < count; i++) {
        const at = end - 1 - bit - i;
        const digit = at >= start ? bytes[at]! : left;
        if (digit === ONE) value |= 1 << i;
        else if (digit !== ZERO) {
          if (!isUnknown(digit)) return false;
          unknown |= 1 << i;
        }
      }
      writeBits(this.values, 0, offset + bit, count, value);
      writeBits(this.unknown, 0, offset + bit, count, unknown);
    }
    return true;
  }

  // While it is x, the clock counts as what it was before.
  #setClock(digit: number): boolean {
    if (digit === ZERO || digit === ONE) this.clock = digit === ONE ? 1 : 0;
    else return isUnknown(digit);
    return true;
  }
}

const isUnknown = (digit: number): boolean => {
  const letter = digit | 0x20;
  return letter === 0x78 || letter === 0x7a;
};
