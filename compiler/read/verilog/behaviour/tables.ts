import type { NetId } from '../../../circuit/ids.js';
import type { Bits, Logic } from './logic.js';

/**
 * Leaf i of a table where `select` has the value i, by a tree of multiplexers.
 *
 * A leaf that is undefined may have any value: it takes that of its neighbour. Undefined if all
 * leaves are.
 */
export function selectFrom(
  select: Bits,
  leaf: (index: number) => NetId | undefined,
  logic: Logic,
): NetId | undefined {
  let level = Array.from({ length: 2 ** select.length }, (_, i) => leaf(i));
  for (const bit of select) {
    level = Array.from({ length: level.length / 2 }, (_, i) => {
      const zero = level[2 * i];
      const one = level[2 * i + 1];
      if (zero === undefined || one === undefined) return zero ?? one;
      return logic.mux(bit, zero, one);
    });
  }
  return level[0];
}
