import { anyBit, readBits } from './rowBits.js';

/** Where some bits of a row stand: a port, or a part of one. */
export interface BitRange {
  readonly offset: number;
  readonly width: number;
}

const DIGITS = Uint8Array.from('0123456789abcdef', (digit) => digit.charCodeAt(0));
const ZERO = 0x30;
const LETTER_B = 0x62;
const LETTER_X = 0x78;

/** The most bytes that `writeValue` writes for a value of some bits. */
export const longestValue = (width: number): number => width + 2;

/**
 * Writes a value of a packed row as ASCII into `bytes` at `to`; returns the end of what it wrote.
 *
 * One bit is `0`, `1` or `x`; more are `0x` and all their digits, or `0b` and all their bits where
 * one is x. The row's words start at `at`, those that tell which bits are x at `unknownAt`
 * (undefined in two-valued models).
 */
export function writeValue(
  bytes: Uint8Array,
  to: number,
  { offset, width }: BitRange,
  rows: Uint32Array,
  at: number,
  unknownAt: number | undefined,
): number {
  if (width === 1 && unknownAt === undefined) {
    bytes[to] = ZERO + ((rows[at + (offset >>> 5)]! >>> (offset & 31)) & 1);
    return to + 1;
  }
  const hasX = unknownAt !== undefined && anyBit(rows, unknownAt, offset, width);
  let end = to;
  if (width > 1) {
    bytes[end++] = ZERO;
    bytes[end++] = hasX ? LETTER_B : LETTER_X;
  }
  if (hasX) {
    for (let bit = offset + width - 1; bit >= offset; bit--) {
      const isX = readBits(rows, unknownAt, bit, 1) === 1;
      bytes[end++] = isX ? LETTER_X : ZERO + readBits(rows, at, bit, 1);
    }
    return end;
  }
  for (let high = width; high > 0; ) {
    const low = (high - 1) & ~31;
    const word = readBits(rows, at, offset + low, high - low);
    for (let shift = (high - low - 1) & ~3; shift >= 0; shift -= 4) {
      bytes[end++] = DIGITS[(word >>> shift) & 15]!;
    }
    high = low;
  }
  return end;
}

/** A value of a packed row as text; see `writeValue`. */
export function formatValue(
  range: BitRange,
  rows: Uint32Array,
  at: number,
  unknownAt: number | undefined,
): string {
  const bytes = new Uint8Array(longestValue(range.width));
  const end = writeValue(bytes, 0, range, rows, at, unknownAt);
  return new TextDecoder().decode(bytes.subarray(0, end));
}
