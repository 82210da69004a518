import type { ModelLayout, RowLayout } from './layout.js';

/** How many independent sequences a lane model can run side by side: the bits of its words. */
export const laneCounts = [32, 64, 128] as const;

/** One of `laneCounts`. */
export type LaneCount = (typeof laneCounts)[number];

/**
 * The words of a lane row for the bits of a packed row: word b holds bit b of the row for every
 * lane, lane l in bit l. In three-valued models as many words follow that tell which lanes have x
 * there (and a 0 in the first group).
 *
 * A word has as many bits as there are lanes; it is stored as `lanes / 32` numbers of 32 bits,
 * lane l in bit `l % 32` of number `l >> 5`.
 */
export const laneRowWords = (row: RowLayout, threeValued: boolean): number =>
  threeValued ? row.bits * 2 : row.bits;

/** 32-bit numbers from one lane row to the next. */
export const laneRowStride = (row: RowLayout, threeValued: boolean, lanes: LaneCount): number =>
  (laneRowWords(row, threeValued) * lanes) >>> 5;

/**
 * The word of a lane row that holds a bit of the packed row, both groups counted; -1 for a bit that
 * only fills up a 32-bit word of the packed row.
 */
export function laneWordOf(row: RowLayout, bit: number): number {
  const group = row.words * 32;
  if (bit < row.bits) return bit;
  return bit >= group && bit < group + row.bits ? row.bits + bit - group : -1;
}

/** Throws RangeError for what is none of `laneCounts`. */
export function checkLanes(lanes: number): asserts lanes is LaneCount {
  if (!laneCounts.some((count) => count === lanes)) {
    throw new RangeError(`lanes are ${laneCounts.join(', ')}, got ${lanes}`);
  }
}

/** Rows of a layout with the length of its lane rows, for both directions. */
export const laneStrides = (
  { inputs, outputs, threeValued }: ModelLayout,
  lanes: LaneCount,
): { readonly input: number; readonly output: number } => ({
  input: laneRowStride(inputs, threeValued, lanes),
  output: laneRowStride(outputs, threeValued, lanes),
});
