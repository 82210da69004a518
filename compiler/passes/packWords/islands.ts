import { TarjanSearch } from '../../circuit/tarjan.js';
import { type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { LANES } from './packs.js';

/** Fewer nodes than this are no island. */
const LEAST = 1000;

/** As many equal islands fill a vector with what repeats from copy to copy alone. */
const MANY = 8;

/** What part of the operations of one of many must be made several times over within it. */
const LEAST_REPEATED = 0.75;

/**
 * Numbers the islands of a graph from 1 on, per node; 0 for nodes in none: large sets of nodes each
 * of which depends on all others, over registers, such as the cores of a chip.
 *
 * Islands have little to do with each other: vectors that hold lanes of several bring together what
 * is wanted apart. Only where there are enough equal ones to fill all lanes, or many that repeat
 * too little within themselves, they are none. `shape` is equal for nodes that look alike, of which
 * at least `least` are worth packing.
 */
export function islandsOf(logic: Logic, shape: Uint32Array, least: number): Uint32Array {
  const { op, a, b, c, next, nodeCount } = logic;
  const search = new TarjanSearch(nodeCount, (node, i) => {
    const kind = op[node]!;
    if (kind === LogicOp.State) return i === 0 ? nodeOf(next[a[node]!]!) : -1;
    const count = kind < LogicOp.And ? 0 : kind === LogicOp.Mux ? 3 : 2;
    return i < count ? nodeOf((i === 0 ? a : i === 1 ? b : c)[node]!) : -1;
  });
  const islands = new Uint32Array(nodeCount);
  let count = 0;
  const large = search.components().filter(({ length }) => length >= LEAST);
  const copies = new Map<number, number>();
  for (const { length } of large) copies.set(length, (copies.get(length) ?? 0) + 1);
  for (const nodes of large) {
    const equal = copies.get(nodes.length)!;
    if (equal >= LANES || (equal >= MANY && !repeats(logic, nodes, shape, least))) continue;
    count++;
    for (const node of nodes) islands[node] = count;
  }
  return islands;
}

function repeats(
  { op }: Logic,
  nodes: readonly number[],
  shape: Uint32Array,
  least: number,
): boolean {
  const counts = new Map<number, number>();
  const operations = nodes.filter((node) => op[node]! >= LogicOp.And);
  for (const node of operations) counts.set(shape[node]!, (counts.get(shape[node]!) ?? 0) + 1);
  const repeated = operations.filter((node) => counts.get(shape[node]!)! >= least).length;
  return repeated >= operations.length * LEAST_REPEATED;
}
