/** A logic value: 0, 1, or 2 for x (unknown; a floating z reads as x). */
export type Value = 0 | 1 | 2;

/** The unknown value x. */
export const X = 2;
