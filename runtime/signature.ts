import type { ModelLayout } from './layout.js';
import {
  MOST_WORDS,
  ROOM,
  type SignatureExports,
  SignatureMemory,
  signatureModule,
} from './signatureModule.js';

// Polynomial of ECMA-182, annex B, without its leading term: 42F0E1EB A9EA3693.
const POLYNOMIAL_HIGH = 0x42f0e1eb;
const POLYNOMIAL_LOW = 0xa9ea3693;

const tables = makeTables();

/**
 * The signature of a response: CRC-64/ECMA-182 (not reflected, initial value 0, no final
 * inversion) over its packed rows.
 *
 * Each cycle gives ceil(bits / 8) bytes, the first bit of the row in the least significant place of
 * the first byte; in three-valued models as many bytes follow that tell which bits are x. Engines,
 * block sizes and machines make no difference.
 */
export class Signature {
  readonly #groups: 1 | 2;
  readonly #groupWords: number;
  readonly #bytes: number;
  readonly #exports: SignatureExports;
  readonly #remainder: DataView;
  readonly #rows: Uint32Array;

  constructor({ outputs, threeValued }: Pick<ModelLayout, 'outputs' | 'threeValued'>) {
    this.#groups = threeValued ? 2 : 1;
    this.#groupWords = outputs.words;
    this.#bytes = (outputs.bits + 7) >>> 3;
    const isWide = this.#bytes > 8 * MOST_WORDS;
    const step = isWide || this.#isDense ? this.#bytes & 7 : this.#bytes;
    // So small that it is compiled at once, as browsers allow everywhere.
    const module = new WebAssembly.Module(signatureModule(step, 4 * this.#groupWords));
    this.#exports = new WebAssembly.Instance(module).exports as unknown as SignatureExports;
    const { buffer } = this.#exports.memory;
    new Uint8Array(buffer).set(tables, SignatureMemory.Tables);
    this.#remainder = new DataView(buffer, SignatureMemory.Remainder, 8);
    this.#rows = new Uint32Array(buffer, SignatureMemory.Rows);
  }

  /** Adds packed response rows. Throws RangeError where the array is too short. */
  add(rows: Uint32Array, cycles: number): void {
    const words = cycles * this.#groups * this.#groupWords;
    if (rows.length < words) throw new RangeError(`expected ${words} words, got ${rows.length}`);
    if (words === 0) return;
    const room = ROOM >>> 2;
    // What is dense may be cut anywhere between words of eight bytes; other rows may not be cut.
    const most = this.#isDense ? room & ~1 : Math.floor(room / this.#groupWords) * this.#groupWords;
    if (most === 0) this.#addHuge(rows, words, room & ~1);
    for (let at = 0; at < words && most > 0; at += most) {
      const count = Math.min(most, words - at);
      this.#rows.set(rows.subarray(at, at + count));
      this.#addLoaded(4 * count);
    }
  }

  /** The signature so far: sixteen hexadecimal digits in lower case. */
  digits(): string {
    return Array.from(this.save(), hex).join('');
  }

  /** The two words from which `restore` goes on. */
  save(): Uint32Array {
    return Uint32Array.of(this.#remainder.getUint32(0), this.#remainder.getUint32(4));
  }

  /** Goes on from saved words. Throws RangeError unless there are two. */
  restore(words: Uint32Array): void {
    if (words.length !== 2) throw new RangeError(`expected two words, got ${words.length}`);
    this.#remainder.setUint32(0, words[0]!);
    this.#remainder.setUint32(4, words[1]!);
  }

  /** Whether no byte of a row is padding. */
  get #isDense(): boolean {
    return this.#bytes === 4 * this.#groupWords;
  }

  #addLoaded(bytes: number): void {
    const { Rows: start } = SignatureMemory;
    const { stream, rows } = this.#exports;
    const stride = 4 * this.#groupWords;
    if (this.#isDense) {
      const whole = bytes & ~7;
      stream(start, start + whole);
      // The last four bytes of an odd number of words, which one step of `rows` takes.
      if (whole < bytes) rows(start + whole, start + whole + 1);
    } else if (this.#bytes > 8 * MOST_WORDS) {
      for (let at = start; at < start + bytes; at += stride) this.#addWide(at);
    } else rows(start, start + bytes);
  }

  #addWide(at: number): void {
    const whole = at + (this.#bytes & ~7);
    this.#exports.stream(at, whole);
    if ((this.#bytes & 7) > 0) this.#exports.rows(whole, whole + 1);
  }

  /** Rows that do not fit the memory, piece by piece. */
  #addHuge(rows: Uint32Array, words: number, most: number): void {
    const { Rows: start } = SignatureMemory;
    for (let row = 0; row < words; row += this.#groupWords) {
      for (let at = 0; at < this.#bytes; at += 4 * most) {
        const from = row + (at >>> 2);
        this.#rows.set(rows.subarray(from, Math.min(from + most, row + this.#groupWords)));
        const bytes = Math.min(4 * most, this.#bytes - at);
        this.#exports.stream(start, start + (bytes & ~7));
        if ((bytes & 7) > 0) this.#exports.rows(start + (bytes & ~7), start + (bytes & ~7) + 1);
      }
    }
  }
}

const hex = (half: number): string => half.toString(16).padStart(8, '0');

/** The bytes of eight tables: see `SignatureMemory.Tables`. */
function makeTables(): Uint8Array {
  const made = new Uint8Array(8 * 2048);
  const view = new DataView(made.buffer);
  for (let byte = 0; byte < 256; byte++) {
    let high = byte << 24;
    let low = 0;
    for (let k = 0; k < 8; k++) {
      for (let bit = 0; bit < 8; bit++) {
        const carry = high < 0;
        high = (high << 1) | (low >>> 31);
        low <<= 1;
        if (!carry) continue;
        high ^= POLYNOMIAL_HIGH;
        low ^= POLYNOMIAL_LOW;
      }
      view.setInt32(k * 2048 + byte * 8, high);
      view.setInt32(k * 2048 + byte * 8 + 4, low);
    }
  }
  return made;
}
