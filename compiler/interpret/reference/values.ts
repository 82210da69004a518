import { Priority } from '../../circuit/circuit.js';
import type { Value } from '../../circuit/values.js';

/** A function of two values as a table: the result for a and b is at index 3a + b. */
export type ValueTable = readonly Value[];

// Rows and columns in the order 0, 1, x. A floating z reads as x, so its row and column equal x's.

/** IEEE 1364-2005, 7.2, truth table of `and`. */
export const AND: ValueTable = [0, 0, 0, 0, 1, 2, 0, 2, 2];
/** IEEE 1364-2005, 7.2, truth table of `or`. */
export const OR: ValueTable = [0, 1, 2, 1, 1, 1, 2, 1, 2];
/** IEEE 1364-2005, 7.2, truth table of `xor`. */
export const XOR: ValueTable = [0, 1, 2, 1, 0, 2, 2, 2, 2];
/** IEEE 1364-2005, 7.3, truth table of `not`. */
export const NOT: readonly Value[] = [1, 0, 2];

/** What is known of a value that is either a or b. */
export const merge = (a: number, b: number): number => (a === b ? a : 2);

/** The conditional operator, IEEE 1364-2005, 5.1.13: where the select is x, equal data stay. */
export function choose(select: number, ifZero: number, ifOne: number): number {
  if (select === 0) return ifZero;
  return select === 1 ? ifOne : merge(ifZero, ifOne);
}

/**
 * What a register or latch that holds `held` shows under asynchronous set and reset.
 *
 * A control that is x gives what both its values agree on. `both` is what an element of priority
 * `Unknown` shows while both controls are active.
 */
export function withSetReset(
  held: number,
  set: number,
  reset: number,
  priority: number,
  both: number,
): number {
  if ((set | reset) === 0) return held;
  if (priority === Priority.SetWins) return choose(set, choose(reset, held, 0), 1);
  const shown = choose(reset, choose(set, held, 1), 0);
  return priority === Priority.ResetWins ? shown : choose(AND[set * 3 + reset]!, shown, both);
}
