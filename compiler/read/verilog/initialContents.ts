import type { Value } from '../../circuit/values.js';

/**
 * What a memory holds at power-up as far as the netlist says, in the bytes of `Engine.memoryState`
 * of a three-valued run. Takes no room until something is said.
 */
export class InitialContents {
  readonly #width: number;
  readonly #depth: number;
  readonly #group: number;
  #bytes: Uint8Array | undefined;

  constructor(width: number, depth: number) {
    this.#width = width;
    this.#depth = depth;
    this.#group = Math.ceil(width / 8);
  }

  /** The bytes; undefined where nothing has been said. */
  get bytes(): Uint8Array | undefined {
    return this.#bytes;
  }

  /** A bit of a word, from the right: 0, 1, or 2 where nothing is given. */
  bit(word: number, bit: number): Value {
    if (this.#bytes === undefined) return 2;
    const at = word * 2 * this.#group + (bit >>> 3);
    const isSet = (byte: number): boolean => ((byte >>> (bit & 7)) & 1) === 1;
    if (isSet(this.#bytes[at + this.#group]!)) return 2;
    return isSet(this.#bytes[at]!) ? 1 : 0;
  }

  /** Gives a bit of a word a value. */
  setBit(word: number, bit: number, value: Value): void {
    this.#bytes ??= this.#unknown();
    const bytes = this.#bytes;
    const at = word * 2 * this.#group + (bit >>> 3);
    const mask = 1 << (bit & 7);
    bytes[at] = value === 1 ? bytes[at]! | mask : bytes[at]! & ~mask;
    const unknown = bytes[at + this.#group]!;
    bytes[at + this.#group] = value === 2 ? unknown | mask : unknown & ~mask;
  }

  #unknown(): Uint8Array {
    const group = this.#group;
    const bytes = new Uint8Array(this.#depth * 2 * group);
    const last = this.#width % 8 === 0 ? 0xff : (1 << (this.#width % 8)) - 1;
    for (let at = group; at < bytes.length; at += 2 * group) {
      bytes.fill(0xff, at, at + group - 1);
      bytes[at + group - 1] = last;
    }
    return bytes;
  }
}
