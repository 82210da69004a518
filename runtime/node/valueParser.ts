import { readBits, writeBits } from '../rowBits.js';
import type { BitRange } from '../valueText.js';

// What a digit's byte stands for: 0 to 15, or one of these.
const NO_DIGIT = 255;
const UNKNOWN_DIGIT = 254;
const OPEN_DIGIT = 253;

const digitOf = new Uint8Array(256).fill(NO_DIGIT);
for (let digit = 0; digit < 16; digit++) {
  const text = digit.toString(16);
  digitOf[text.charCodeAt(0)] = digit;
  digitOf[text.toUpperCase().charCodeAt(0)] = digit;
}
for (const letter of 'xXzZ') digitOf[letter.charCodeAt(0)] = UNKNOWN_DIGIT;
digitOf[0x2d] = OPEN_DIGIT;

const SPACE = 0x20;
const TAB = 0x09;
const ZERO = 0x30;

// The longest decimal number that a double holds exactly.
const EXACT_DIGITS = 15;

/** Which digits beyond numbers a value may have. */
export interface DigitRules {
  /** x and z in `0x` and `0b`, and alone for all bits: bits that are unknown. */
  readonly unknown: boolean;
  /** `-` in `0b`, and alone for all bits: bits that do not matter. */
  readonly open: boolean;
}

/**
 * Reads single values: decimal, `0x…`, `0b…`.
 *
 * The result is in `value`, `unknown` (1 for x, with 0 in `value`) and `matters`, least significant
 * word first; only the bits of the width asked for count.
 */
export class ValueParser {
  value: Uint32Array;
  unknown: Uint32Array;
  matters: Uint32Array;
  readonly #rules: DigitRules;

  /** For values of up to `widest` bits. */
  constructor(widest: number, rules: DigitRules) {
    const words = Math.max(1, (widest + 31) >>> 5);
    this.value = new Uint32Array(words);
    this.unknown = new Uint32Array(words);
    this.matters = new Uint32Array(words);
    this.#rules = rules;
  }

  /** Reads `bytes[start … end-1]`, not blank; returns what is wrong with it, or undefined. */
  parse(bytes: Uint8Array, start: number, end: number, width: number): string | undefined {
    let first = start;
    let last = end;
    while (bytes[first] === SPACE || bytes[first] === TAB) first++;
    while (last > first && (bytes[last - 1] === SPACE || bytes[last - 1] === TAB)) last--;
    const words = (width + 31) >>> 5;
    for (let word = 0; word < words; word++) {
      this.value[word] = 0;
      this.unknown[word] = 0;
      this.matters[word] = 0xffffffff;
    }
    const base = bytes[first] === ZERO && last - first > 2 ? bytes[first + 1]! | 0x20 : 0;
    if (base === 0x78) return this.#digits(bytes, first + 2, last, width, 4);
    if (base === 0x62) return this.#digits(bytes, first + 2, last, width, 1);
    if (last - first === 1 && digitOf[bytes[first]!]! >= OPEN_DIGIT) {
      return this.#single(digitOf[bytes[first]!]!, words);
    }
    return this.#decimal(bytes, first, last, width);
  }

  /**
   * Whether bits of the packed row at word `at` are as the value read last: those that matter.
   * `unknownAt` is where the row tells what is x; undefined in two-valued models.
   */
  matches(
    { offset, width }: BitRange,
    rows: Uint32Array,
    at: number,
    unknownAt: number | undefined,
  ): boolean {
    const { value, unknown, matters } = this;
    for (let bit = 0; bit < width; bit += 32) {
      const count = Math.min(32, width - bit);
      const word = bit >>> 5;
      const mask = matters[word]! & (count === 32 ? -1 : (1 << count) - 1);
      if ((readBits(rows, at, offset + bit, count) ^ value[word]!) & mask) return false;
      if (unknownAt === undefined) continue;
      if ((readBits(rows, unknownAt, offset + bit, count) ^ unknown[word]!) & mask) return false;
    }
    return true;
  }

  #digits(bytes: Uint8Array, first: number, last: number, width: number, bits: 1 | 4) {
    const all = (1 << bits) - 1;
    let bit = 0;
    for (let at = last - 1; at >= first; at--, bit += bits) {
      const digit = digitOf[bytes[at]!]!;
      const isNumber = digit <= all;
      if (!isNumber) {
        const refusal = this.#refusal(digit, bits);
        if (refusal) return refusal;
      }
      const room = width - bit;
      if (room < bits && (isNumber ? digit >>> Math.max(0, room) !== 0 : room <= 0)) {
        return tooLarge(width);
      }
      if (digit === 0) continue;
      const word = bit >>> 5;
      if (isNumber) this.value[word]! |= digit << (bit & 31);
      else if (digit === UNKNOWN_DIGIT) this.unknown[word]! |= all << (bit & 31);
      else this.matters[word]! &= ~(all << (bit & 31));
    }
    return undefined;
  }

  #single(digit: number, words: number): string | undefined {
    const refusal = this.#refusal(digit, 1);
    if (refusal) return refusal;
    if (digit === UNKNOWN_DIGIT) this.unknown.fill(0xffffffff, 0, words);
    else this.matters.fill(0, 0, words);
    return undefined;
  }

  #refusal(digit: number, bits: number): string | undefined {
    if (digit === UNKNOWN_DIGIT) {
      return this.#rules.unknown ? undefined : 'x and z need a three-valued run';
    }
    if (digit === OPEN_DIGIT && this.#rules.open) {
      return bits === 1 ? undefined : 'a digit - belongs in 0b…';
    }
    return NO_VALUE;
  }

  #decimal(bytes: Uint8Array, first: number, last: number, width: number): string | undefined {
    let number = 0;
    for (let at = first; at < last; at++) {
      const digit = bytes[at]! - ZERO;
      if (digit < 0 || digit > 9) return NO_VALUE;
      number = number * 10 + digit;
    }
    if (last === first) return NO_VALUE;
    if (last - first > EXACT_DIGITS) return this.#long(bytes, first, last, width);
    if (width < 53 && number >= 2 ** width) return tooLarge(width);
    this.value[0] = number;
    if (width > 32) this.value[1] = number / 0x1_0000_0000;
    return undefined;
  }

  #long(bytes: Uint8Array, first: number, last: number, width: number): string | undefined {
    let number = BigInt(new TextDecoder().decode(bytes.subarray(first, last)));
    if (number >> BigInt(width) !== 0n) return tooLarge(width);
    for (let word = 0; number !== 0n; word++) {
      this.value[word] = Number(number & 0xffffffffn);
      number >>= 32n;
    }
    return undefined;
  }
}

const NO_VALUE = 'a value is decimal, 0x… or 0b…';

const tooLarge = (width: number): string =>
  `the value is too large for ${width === 1 ? 'one bit' : `${width} bits`}`;

/** Puts the low `width` bits of `words` into the row at word `at`, from bit `offset` on. */
export function putWords(
  row: Uint32Array,
  at: number,
  offset: number,
  width: number,
  words: Uint32Array,
): void {
  for (let bit = 0; bit < width; bit += 32) {
    writeBits(row, at, offset + bit, Math.min(32, width - bit), words[bit >>> 5]!);
  }
}
