import type binaryen from 'binaryen';
import { FIRST_AREA } from './areaLayout.js';

/** Label of the block around all code of a function, to which fences would branch. */
export const LEAVE = 'leave';

/** Operations between two fences: about what an engine's registers can serve. */
export const STRETCH = 24;

/**
 * A branch to `LEAVE` that is never taken, since no area stands at an address that low. It keeps
 * operations in the order they were put in.
 *
 * Between two branches an optimizing engine orders operations without effects by itself. V8's
 * TurboFan goes breadth first from the last one, so that in long code without branches nearly every
 * value is stored and loaded again: half of all instructions, in measurements on published circuits.
 * A comparison and a branch are decoded as one. `number` differs from fence to fence of a function:
 * an engine that has seen a condition drops the next branch on it.
 */
export function fence(
  { i32, local, br }: binaryen.Module,
  type: binaryen.Type,
  current: number,
  number: number,
): binaryen.ExpressionRef {
  const condition = i32.eq(local.get(current, type), i32.const(1 + (number % (FIRST_AREA - 1))));
  return br(LEAVE, condition);
}
