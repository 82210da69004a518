import type { Value } from '../../../circuit/values.js';
import { Char } from '../characters.js';

/** A stretch of a data file, in byte offsets. */
interface Stretch {
  readonly start: number;
  readonly end: number;
}

/** What a data file of a memory has one after another. */
export type DataWord =
  | (Stretch & { readonly kind: 'address'; readonly address: number })
  | (Stretch & {
      readonly kind: 'word';
      /** A bit from the right; beyond the digits, 0, or x where the first digit is x or z. */
      bit(index: number): Value;
      /** Whether there is a 1 beyond so many bits. */
      exceeds(width: number): boolean;
    })
  | (Stretch & { readonly kind: 'problem'; readonly message: string });

/**
 * The numbers and `@` addresses of a data file for `$readmemh` (radix 16) or `$readmemb` (2), as in
 * IEEE 1364-2005, 17.2.9: separated by white space and comments, with `_` anywhere but in front.
 * Ends at the first problem.
 */
export function* dataWords(bytes: Uint8Array, radix: 16 | 2): Iterable<DataWord> {
  for (let at = skipped(bytes, 0); at < bytes.length; ) {
    if (isOpenComment(bytes, at)) {
      yield { kind: 'problem', message: 'this comment has no end', start: at, end: at + 2 };
      return;
    }
    const start = at;
    while (at < bytes.length && !isSeparator(bytes, at)) at++;
    const word =
      bytes[start] === Char.At ? address(bytes, start, at) : number(bytes, start, at, radix);
    yield word;
    if (word.kind === 'problem') return;
    at = skipped(bytes, at);
  }
}

/** The first byte from an offset on that is neither white space nor in a comment. */
function skipped(bytes: Uint8Array, from: number): number {
  let at = from;
  for (;;) {
    while (at < bytes.length && isBlank(bytes[at]!)) at++;
    if (bytes[at] !== Char.Slash) return at;
    if (bytes[at + 1] === Char.Slash) {
      while (at < bytes.length && bytes[at] !== Char.LineFeed) at++;
    } else if (bytes[at + 1] === Char.Star) {
      const end = endOfComment(bytes, at + 2);
      if (end < 0) return at;
      at = end;
    } else return at;
  }
}

function endOfComment(bytes: Uint8Array, from: number): number {
  for (let at = from; at + 1 < bytes.length; at++) {
    if (bytes[at] === Char.Star && bytes[at + 1] === Char.Slash) return at + 2;
  }
  return -1;
}

const isOpenComment = (bytes: Uint8Array, at: number): boolean =>
  bytes[at] === Char.Slash && bytes[at + 1] === Char.Star;

const isBlank = (byte: number): boolean => byte === 32 || (byte >= 9 && byte <= 13);

const isSeparator = (bytes: Uint8Array, at: number): boolean =>
  isBlank(bytes[at]!) ||
  (bytes[at] === Char.Slash && (bytes[at + 1] === Char.Slash || bytes[at + 1] === Char.Star));

// A digit that is x or z, of any number of bits.
const UNKNOWN = -1;
const NO_DIGIT = -2;

function digitOf(byte: number): number {
  if (byte >= 48 && byte <= 57) return byte - 48;
  const letter = byte | 32;
  if (letter >= 97 && letter <= 102) return letter - 87;
  return letter === 120 || letter === 122 ? UNKNOWN : NO_DIGIT;
}

function address(bytes: Uint8Array, start: number, end: number): DataWord {
  let value = 0;
  let digits = 0;
  for (let at = start + 1; at < end; at++) {
    const digit = digitOf(bytes[at]!);
    if (bytes[at] === Char.Underscore && digits > 0) continue;
    if (digit < 0) {
      const message = 'an address is @ and hexadecimal digits, such as @1f';
      return { kind: 'problem', message, start: at, end: at + 1 };
    }
    value = Math.min(value * 16 + digit, Number.MAX_SAFE_INTEGER);
    digits++;
  }
  if (digits > 0) return { kind: 'address', address: value, start, end };
  const message = 'the hexadecimal address must follow @ without a space';
  return { kind: 'problem', message, start, end };
}

function number(bytes: Uint8Array, start: number, end: number, radix: 16 | 2): DataWord {
  const digits: number[] = [];
  for (let at = start; at < end; at++) {
    if (bytes[at] === Char.Underscore && at > start) continue;
    const digit = digitOf(bytes[at]!);
    if (digit === NO_DIGIT || digit >= radix) {
      const text = new TextDecoder().decode(bytes.subarray(at, Math.min(end, at + 4)));
      const what = radix === 16 ? 'hexadecimal' : 'binary';
      const character = [...text][0] ?? '';
      const message = `\`${character}\` is no ${what} digit; a number here has no size and no base`;
      return { kind: 'problem', message, start: at, end: at + 1 };
    }
    digits.push(digit);
  }
  return { kind: 'word', start, end, ...bitsOf(digits.reverse(), radix === 16 ? 4 : 1) };
}

/** Bits of digits, the lowest digit first. */
function bitsOf(digits: readonly number[], size: number) {
  const first = digits[digits.length - 1]!;
  const bit = (index: number): Value => {
    const digit = digits[Math.floor(index / size)] ?? (first === UNKNOWN ? first : 0);
    if (digit === UNKNOWN) return 2;
    return ((digit >>> (index % size)) & 1) as 0 | 1;
  };
  const exceeds = (width: number): boolean => {
    for (let index = width; index < digits.length * size; index++) {
      if (bit(index) === 1) return true;
    }
    return false;
  };
  return { bit, exceeds };
}
