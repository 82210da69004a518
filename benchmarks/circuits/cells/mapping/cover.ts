import { applied, pinColumn } from '../expression.js';
import type { LogicGraph } from './logicGraph.js';
import { type Match, matchOf, mostInputs } from './matches.js';
import type { LocalNet } from './structure.js';

/** A cell in place of some gates: its output, and the net of each pin of the match. */
export interface Covering {
  readonly output: LocalNet;
  readonly match: Match;
  readonly leaves: readonly LocalNet[];
}

/** Leaves of a tree of gates above a net. */
type Cut = readonly LocalNet[];

interface Best extends Covering {
  readonly area: number;
}

const mostCuts = 40;

/**
 * Covers the logic that the roots need with cells, by the smallest area over each tree of gates
 * that are read once. Method: A. V. Aho, S. C. Johnson, "Optimal code generation for expression
 * trees", 1976, with cells in place of instructions, found by truth table in place of shape.
 */
export function cover(graph: LogicGraph, roots: ReadonlySet<LocalNet>): Covering[] {
  const fanOut = graph.fanOut();
  const readers = (net: LocalNet) => (fanOut.get(net) ?? 0) + (roots.has(net) ? 1 : 0);
  const isSingle = (net: LocalNet) => !roots.has(net) && readers(net) === 1;
  const isInverter = (net: LocalNet) => graph.nodes.get(net)?.operator === 'not';
  const cuts = new Map<LocalNet, readonly Cut[]>();
  const best = new Map<LocalNet, Best>();
  for (const net of graph.inOrder()) {
    const { inputs } = graph.nodes.get(net)!;
    // Inverters are looked through even where others read them, for the cells that invert a pin.
    const options = inputs.map((input): readonly Cut[] => {
      const isOpen = isSingle(input) || (isInverter(input) && !isInverter(net));
      return [[input], ...(isOpen ? (cuts.get(input) ?? []) : [])];
    });
    const found = joined(options);
    cuts.set(net, found);
    const covering = bestOf(graph, net, found, (leaf) => {
      const area = best.get(leaf)?.area ?? 0;
      return isSingle(leaf) ? area : isInverter(leaf) ? area / readers(leaf) : 0;
    });
    if (covering !== undefined) best.set(net, covering);
  }
  return chosen(best, roots);
}

/** One option of each input together, the smallest first. */
function joined(options: readonly (readonly Cut[])[]): readonly Cut[] {
  let cuts: Cut[] = [[]];
  for (const choices of options) {
    cuts = cuts.flatMap((cut) => choices.map((more) => [...new Set([...cut, ...more])]));
  }
  const fitting = cuts.filter((cut) => cut.length <= mostInputs);
  return fitting.toSorted((a, b) => a.length - b.length).slice(0, mostCuts);
}

function bestOf(
  graph: LogicGraph,
  net: LocalNet,
  cuts: readonly Cut[],
  areaBelow: (leaf: LocalNet) => number,
): Best | undefined {
  let best: Best | undefined;
  for (const cut of cuts) {
    const { table, leaves } = withoutUnused(tableOf(graph, net, cut), cut);
    const match = matchOf(table, leaves.length);
    if (match === undefined) continue;
    const area = leaves.reduce((sum, leaf) => sum + areaBelow(leaf), match.area);
    if (best === undefined || area < best.area) best = { output: net, match, leaves, area };
  }
  return best;
}

/** The function of a net in terms of the leaves of a cut. */
function tableOf(graph: LogicGraph, root: LocalNet, leaves: Cut): bigint {
  const all = (1n << (1n << BigInt(leaves.length))) - 1n;
  const known = new Map(leaves.map((leaf, k) => [leaf, pinColumn(k, leaves.length)]));
  const table = (net: LocalNet): bigint => {
    const column = known.get(net);
    if (column !== undefined) return column;
    const { operator, inputs } = graph.nodes.get(net)!;
    const value = applied(operator, inputs.map(table), all);
    known.set(net, value);
    return value;
  };
  return table(root);
}

/** Leaves out what makes no difference, as an input that a gate has twice may do. */
function withoutUnused(
  table: bigint,
  leaves: Cut,
): { readonly table: bigint; readonly leaves: Cut } {
  const unused = leaves.findIndex((_, k) => {
    const column = pinColumn(k, leaves.length);
    return (table & column) >> (1n << BigInt(k)) === (table & ~column);
  });
  if (unused < 0) return { table, leaves };
  let narrow = 0n;
  const low = (1 << unused) - 1;
  for (let row = 0; row < 1 << (leaves.length - 1); row++) {
    const from = (row & low) | ((row & ~low) << 1);
    narrow |= ((table >> BigInt(from)) & 1n) << BigInt(row);
  }
  return withoutUnused(narrow, leaves.toSpliced(unused, 1));
}

function chosen(best: ReadonlyMap<LocalNet, Best>, roots: Iterable<LocalNet>): Covering[] {
  const coverings: Covering[] = [];
  const pending = [...roots];
  const seen = new Set<LocalNet>();
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const covering = best.get(net);
    if (covering === undefined || seen.has(net)) continue;
    seen.add(net);
    coverings.push(covering);
    pending.push(...covering.leaves);
  }
  return coverings;
}
