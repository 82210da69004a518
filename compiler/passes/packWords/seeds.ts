import { LogicOp } from '../../logic/logic.js';
import type { Packs } from './packs.js';

/**
 * Groups operation nodes of the same shape that are in no pack, at least `least` of them, those with
 * the highest nodes first, so that what they read is packed for their sake.
 */
export function seedGroups(
  packs: Packs,
  shape: Uint32Array,
  heights: Uint32Array,
  least: number,
): number[][] {
  const { logic } = packs;
  const groups = new Map<number, number[]>();
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op[node]!;
    if (op < LogicOp.And || op > LogicOp.Mux || packs.isPacked(node)) continue;
    const group = groups.get(shape[node]!);
    if (group === undefined) groups.set(shape[node]!, [node]);
    else group.push(node);
  }
  const height = (group: readonly number[]): number => heights[group[group.length - 1]!]!;
  return [...groups.values()]
    .filter((group) => group.length >= least)
    .sort((p, q) => height(q) - height(p));
}
