import { cellName } from '../cell.js';
import { cellNamed } from '../library.js';
import { type Adder, takeAdders } from './adders.js';
import { type Covering, cover } from './cover.js';
import {
  type Connection,
  type PlacedCell,
  placeFlipFlops,
  placeGatedFlipFlops,
} from './flipFlops.js';
import { LogicGraph } from './logicGraph.js';
import { cellFor } from './matches.js';
import type { LocalNet, Structure } from './structure.js';

/** A module made of cells. */
export interface Template {
  readonly structure: Structure;
  /** Names of the nets by number; empty for those that mapping made. */
  readonly netNames: readonly string[];
  readonly cells: readonly PlacedCell[];
}

/** Maps the flip-flops and the logic of a module onto cells; what it instantiates stays. */
export function mapModule(structure: Structure, hasClockGates: boolean): Template {
  const graph = new LogicGraph(structure);
  const place = hasClockGates ? placeGatedFlipFlops : placeFlipFlops;
  const flipFlops = place(graph, structure.flipFlops);
  const roots = new Set(outsideReads(structure, flipFlops));
  const adders = takeAdders(graph, roots);
  for (const { a, b, ci } of adders)
    for (const net of [a, b, ci]) if (net !== undefined) roots.add(net);
  const coverings = cover(graph, roots);
  const readers = new Map<LocalNet, number>();
  for (const { leaves } of coverings) {
    for (const leaf of leaves) readers.set(leaf, (readers.get(leaf) ?? 0) + 1);
  }
  const cells = [
    ...flipFlops,
    ...adders.map(placeAdder),
    ...coverings.map((covering) => placeCovering(covering, readers.get(covering.output) ?? 1)),
  ];
  return { structure, netNames: graph.netNames, cells };
}

/** Nets that the logic has to provide: to flip-flops, to other modules and to its own ports. */
function* outsideReads(structure: Structure, flipFlops: readonly PlacedCell[]) {
  for (const { pins } of flipFlops) for (const [, nets] of pins) yield* nets;
  for (const { pins } of structure.children) for (const nets of pins.values()) yield* nets;
  for (const { nets } of structure.ports) yield* nets;
  for (const pair of structure.joins) yield* pair;
}

function placeAdder({ a, b, ci, s, co }: Adder): PlacedCell {
  const carry: Connection[] = ci === undefined ? [] : [['ci', [ci]]];
  return {
    cell: cellNamed(cellName(ci === undefined ? 'half_adder' : 'full_adder', 1)),
    name: undefined,
    pins: [['a', [a]], ['b', [b]], ...carry, ['s', [s]], ['co', [co]]],
  };
}

function placeCovering({ output, match, leaves }: Covering, readers: number): PlacedCell {
  const inputs = match.pins.map((pin, i): Connection => [pin, [leaves[i]!]]);
  return {
    cell: cellFor(match.family, readers),
    name: undefined,
    pins: [...inputs, [match.output, [output]]],
  };
}
