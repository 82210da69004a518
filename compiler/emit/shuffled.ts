import type binaryen from 'binaryen';
import type { ConstantPool } from './constantPool.js';
import { LANES } from './lanes.js';

/** A lane of no vector: `swizzle` gives 0 for it, however it is rounded. */
const NOWHERE = 0xff;

/**
 * Lane `lanes[i]` of `first`, or of `second` where that is 16 or more; a lane below 0 does not
 * matter. Without `second` all are of `first`. In place of `i8x16.shuffle`, which puts its orders
 * together from four pieces, wherever it stands, `swizzle` loads them.
 */
export function shuffled(
  { i8x16, v128, i32 }: binaryen.Module,
  pool: ConstantPool,
  lanes: readonly number[],
  first: binaryen.ExpressionRef,
  second?: binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const orderedBy = (vector: binaryen.ExpressionRef, order: readonly number[]) =>
    i8x16.swizzle(vector, v128.load(pool.addressOf(order), 16, i32.const(0), '0'));
  if (second === undefined) {
    return orderedBy(
      first,
      lanes.map((lane) => (lane < 0 ? NOWHERE : lane % LANES)),
    );
  }
  return v128.or(
    orderedBy(
      first,
      lanes.map((lane) => (lane < 0 || lane >= LANES ? NOWHERE : lane)),
    ),
    orderedBy(
      second,
      lanes.map((lane) => (lane < LANES ? NOWHERE : lane - LANES)),
    ),
  );
}
