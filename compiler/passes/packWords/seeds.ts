import { LogicOp } from '../../logic/logic.js';
import type { Packs } from './packs.js';

/**
 * Groups operation nodes of the same shape, and of the same island if there are any, that are in no
 * pack, at least `least` of them, those with the highest nodes first, so that what they read is packed
 * for their sake.
 */
export function seedGroups(
  packs: Packs,
  shape: Uint32Array,
  heights: Uint32Array,
  least: number,
  islands?: Uint32Array,
): number[][] {
  const { logic } = packs;
  const groups = new Map<number, number[]>();
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op[node]!;
    if (op < LogicOp.And || op > LogicOp.Mux || packs.isPacked(node)) continue;
    if (packs.isDead[node] === 1) continue;
    const key = shape[node]! + (islands?.[node] ?? 0) * 2 ** 32;
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [node]);
    else group.push(node);
  }
  const height = (group: readonly number[]): number => heights[group[group.length - 1]!]!;
  return [...groups.values()]
    .filter((group) => group.length >= least)
    .sort((p, q) => height(q) - height(p));
}
