import type { Literal } from '../../logic/logic.js';

/**
 * Bits that are those of a sum: the numbers `words` and `constant` add up, but for multiples of
 * 2^width, to the number that `sum` makes.
 */
export interface Addition {
  readonly width: number;
  /** Per number its bits, lowest first; `FALSE` where it has none. Other constants have been added. */
  readonly words: readonly (readonly Literal[])[];
  readonly constant: bigint;
  /** Per bit its literal, or -1 where nothing reads it. */
  readonly sum: readonly Literal[];
}
