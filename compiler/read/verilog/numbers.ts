import type { NumberExpression } from './syntax.js';

/** Added to the base in a scanner's `value` where the base letter follows an `s`. */
export const SIGNED_BASE = 32;

/** The widest number read; IEEE 1364-2005, clause 3.5.1, asks for 65536 bits at least. */
export const MAX_WIDTH = 1 << 20;

/** 2, 8, 10 or 16 for the letters b, o, d and h in either case; 0 for any other byte. */
export function baseOfLetter(letter: number | undefined): number {
  switch (letter) {
    case 66:
    case 98:
      return 2;
    case 79:
    case 111:
      return 8;
    case 68:
    case 100:
      return 10;
    case 72:
    case 104:
      return 16;
    default:
      return 0;
  }
}

/** The bits of a number, and the width they need at least. */
export interface NumberBits {
  readonly value: bigint;
  readonly unknown: bigint;
  readonly highZ: bigint;
  readonly extends: NumberExpression['extends'];
}

/** The bits of decimal digits, `_` among them. */
export function decimalBits(text: string): NumberBits {
  return known(BigInt(text.replaceAll('_', '')));
}

/**
 * The bits of the digits after a base (clause 3.5.1): `0-9 a-f x z ? _` as the base allows.
 * Returns a sentence about the first fault instead where there is one.
 */
export function basedBits(base: number, text: string): NumberBits | string {
  const digits = text.replaceAll('_', '').toLowerCase();
  if (digits === '') return 'digits are missing after the base';
  if (base === 10 && digits.length === 1 && 'xz?'.includes(digits)) {
    return unknownFill(digits === 'x' ? 'x' : 'z');
  }
  const allowed = base === 10 ? '0123456789' : `${'0123456789abcdef'.slice(0, base)}xz?`;
  for (const digit of digits) {
    if (!allowed.includes(digit)) return `'${digit}' is no digit of base ${base}`;
  }
  if (base === 10) return known(BigInt(digits));
  return digitBits(base, digits);
}

/**
 * The bits of a number cut or extended to its width (clause 3.5.1): with zeros, or with x or z
 * where the leftmost digit is one.
 */
export function fitToWidth(bits: NumberBits, width: number): NumberBits {
  const mask = (1n << BigInt(width)) - 1n;
  if (bits.extends === 'zero') {
    return {
      ...bits,
      value: bits.value & mask,
      unknown: bits.unknown & mask,
      highZ: bits.highZ & mask,
    };
  }
  // The leftmost digit is x or z, so that the highest bit in `unknown` is its own.
  const written = BigInt(bits.unknown.toString(2).length);
  const fill = mask & ~((1n << written) - 1n);
  const highZ = bits.extends === 'z' ? bits.highZ | fill : bits.highZ;
  return {
    value: bits.value & mask,
    unknown: (bits.unknown | fill) & mask,
    highZ: highZ & mask,
    extends: bits.extends,
  };
}

function known(value: bigint): NumberBits {
  return { value, unknown: 0n, highZ: 0n, extends: 'zero' };
}

function unknownFill(kind: 'x' | 'z'): NumberBits {
  return { value: 0n, unknown: 1n, highZ: kind === 'z' ? 1n : 0n, extends: kind };
}

function digitBits(base: number, digits: string): NumberBits {
  const prefix = base === 2 ? '0b' : base === 8 ? '0o' : '0x';
  const first = digits[0];
  if (!/[xz?]/.test(digits)) return known(BigInt(prefix + digits));
  const full = (base - 1).toString(base);
  const pick = (wanted: RegExp): bigint =>
    BigInt(prefix + digits.replace(/./g, (digit) => (wanted.test(digit) ? full : '0')));
  return {
    value: BigInt(prefix + digits.replace(/[xz?]/g, '0')),
    unknown: pick(/[xz?]/),
    highZ: pick(/[z?]/),
    extends: first === 'x' ? 'x' : first === 'z' || first === '?' ? 'z' : 'zero',
  };
}
