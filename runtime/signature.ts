import type { ModelLayout } from './layout.js';

// Polynomial of ECMA-182, annex B, without its leading term: 42F0E1EB A9EA3693.
const POLYNOMIAL_HIGH = 0x42f0e1eb;
const POLYNOMIAL_LOW = 0xa9ea3693;

// Entry [k][b] is what byte b becomes when k more zero bytes follow it: high half at an even place,
// low half after it. The eight bytes of two words are then looked up independently of each other.
const BYTE_STRIDE = 512;
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
  #high = 0;
  #low = 0;

  constructor({ outputs, threeValued }: Pick<ModelLayout, 'outputs' | 'threeValued'>) {
    this.#groups = threeValued ? 2 : 1;
    this.#groupWords = outputs.words;
    this.#bytes = (outputs.bits + 7) >>> 3;
  }

  /** Adds packed response rows. Throws RangeError where the array is too short. */
  add(rows: Uint32Array, cycles: number): void {
    const words = cycles * this.#groups * this.#groupWords;
    if (rows.length < words) throw new RangeError(`expected ${words} words, got ${rows.length}`);
    const restBytes = this.#bytes & 3;
    if (restBytes === 0) {
      this.#addWords(rows, 0, words);
      return;
    }
    const wholeWords = this.#bytes >>> 2;
    for (let at = 0; at < words; at += this.#groupWords) {
      if (wholeWords > 0) this.#addWords(rows, at, at + wholeWords);
      this.#addBytes(rows[at + wholeWords]!, restBytes);
    }
  }

  /** The signature so far: sixteen hexadecimal digits in lower case. */
  digits(): string {
    return hex(this.#high) + hex(this.#low);
  }

  /** The two words from which `restore` goes on. */
  save(): Uint32Array {
    return Uint32Array.of(this.#high, this.#low);
  }

  /** Goes on from saved words. Throws RangeError unless there are two. */
  restore(words: Uint32Array): void {
    if (words.length !== 2) throw new RangeError(`expected two words, got ${words.length}`);
    this.#high = words[0]! | 0;
    this.#low = words[1]! | 0;
  }

  #addWords(rows: Uint32Array, start: number, end: number): void {
    let high = this.#high;
    let low = this.#low;
    let i = start;
    for (; i + 1 < end; i += 2) {
      const first = rows[i]!;
      const second = rows[i + 1]!;
      const a = 7 * BYTE_STRIDE + (((high >>> 24) ^ first) & 255) * 2;
      const b = 6 * BYTE_STRIDE + (((high >>> 16) ^ (first >>> 8)) & 255) * 2;
      const c = 5 * BYTE_STRIDE + (((high >>> 8) ^ (first >>> 16)) & 255) * 2;
      const d = 4 * BYTE_STRIDE + ((high ^ (first >>> 24)) & 255) * 2;
      const e = 3 * BYTE_STRIDE + (((low >>> 24) ^ second) & 255) * 2;
      const f = 2 * BYTE_STRIDE + (((low >>> 16) ^ (second >>> 8)) & 255) * 2;
      const g = BYTE_STRIDE + (((low >>> 8) ^ (second >>> 16)) & 255) * 2;
      const h = ((low ^ (second >>> 24)) & 255) * 2;
      high =
        tables[a]! ^
        tables[b]! ^
        tables[c]! ^
        tables[d]! ^
        tables[e]! ^
        tables[f]! ^
        tables[g]! ^
        tables[h]!;
      low =
        tables[a + 1]! ^
        tables[b + 1]! ^
        tables[c + 1]! ^
        tables[d + 1]! ^
        tables[e + 1]! ^
        tables[f + 1]! ^
        tables[g + 1]! ^
        tables[h + 1]!;
    }
    this.#high = high;
    this.#low = low;
    if (i < end) this.#addBytes(rows[i]!, 4);
  }

  #addBytes(word: number, count: number): void {
    let high = this.#high;
    let low = this.#low;
    for (let i = 0; i < count; i++) {
      const entry = (((high >>> 24) ^ (word >>> (8 * i))) & 255) * 2;
      high = ((high << 8) | (low >>> 24)) ^ tables[entry]!;
      low = (low << 8) ^ tables[entry + 1]!;
    }
    this.#high = high;
    this.#low = low;
  }
}

const hex = (half: number): string => (half >>> 0).toString(16).padStart(8, '0');

function makeTables(): Int32Array {
  const made = new Int32Array(8 * BYTE_STRIDE);
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
      made[k * BYTE_STRIDE + byte * 2] = high;
      made[k * BYTE_STRIDE + byte * 2 + 1] = low;
    }
  }
  return made;
}
