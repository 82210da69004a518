import { readBits, writeBits } from './rowBits.js';

/** Bits that stand together in one packed row and in another. */
export interface BitCopy {
  readonly from: number;
  readonly to: number;
  readonly width: number;
}

/** Takes neighbours together that are neighbours in both rows. */
export function joinedCopies(copies: Iterable<BitCopy>): BitCopy[] {
  const all: { from: number; to: number; width: number }[] = [];
  for (const { from, to, width } of copies) {
    const last = all.at(-1);
    const follows =
      last !== undefined && last.from + last.width === from && last.to + last.width === to;
    if (follows) last.width += width;
    else all.push({ from, to, width });
  }
  return all;
}

/** Copies bits from the row at word `fromAt` of one array to the row at word `toAt` of another. */
export function copyBits(
  copies: readonly BitCopy[],
  from: Uint32Array,
  fromAt: number,
  to: Uint32Array,
  toAt: number,
): void {
  for (const copy of copies) {
    for (let bit = 0; bit < copy.width; bit += 32) {
      const count = Math.min(32, copy.width - bit);
      writeBits(to, toAt, copy.to + bit, count, readBits(from, fromAt, copy.from + bit, count));
    }
  }
}
