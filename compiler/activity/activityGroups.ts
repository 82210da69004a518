import { gateInfo } from '../circuit/gates.js';
import { scopePath } from '../circuit/hierarchy.js';
import type { Design } from '../compile.js';
import { type SignalList, signalName } from '../waveform/signalList.js';
import type { ValueGroup } from './activityCourse.js';
import type { ObservedNets } from './observedNets.js';
import { blocksOf, type OwnedNets, ownedNets } from './ownedNets.js';

/** Signals that are told apart where a circuit has one block alone. */
const MOST_SIGNALS = 4000;

/** Nets that are shown together. */
export interface ActivityGroup extends ValueGroup {
  readonly name: string;
  readonly netCount: number;
}

/**
 * The nets of a list in groups: by instance, as deep as there is room for; by signal where there is
 * one instance alone, or by input and state element where its signals are too many.
 */
export function activityGroups(
  { circuit }: Design,
  list: SignalList,
  observed: ObservedNets,
): ActivityGroup[] {
  const { hierarchy } = circuit;
  const nets = ownedNets(list, (place) => observed.clockOf[place]! >= 0);
  const blocks = blocksOf(hierarchy, list, nets);
  const names = new Set(blocks);
  if (names.size > 1) {
    const name = (scope: number) => scopePath(hierarchy, scope) || circuit.name;
    return grouped(nets, observed, (i) => blocks[i]!, name);
  }
  const name = (entry: number) =>
    entry === OTHERS ? 'all other nets' : signalName(hierarchy, list, entry);
  if (new Set(nets.entry).size <= MOST_SIGNALS) {
    return grouped(nets, observed, (i) => nets.entry[i]!, name);
  }
  const isSource = (i: number) =>
    gateInfo(circuit.kind[list.nets[nets.place[i]!]!]!).role === 'source';
  const keys = Array.from(nets.entry, (entry, i) => (isSource(i) ? entry : OTHERS));
  if (new Set(keys).size <= MOST_SIGNALS) return grouped(nets, observed, (i) => keys[i]!, name);
  return grouped(
    nets,
    observed,
    () => 0,
    () => circuit.name,
  );
}

/** Stands for the entries that are not told apart. */
const OTHERS = -1;

function grouped(
  nets: OwnedNets,
  { literalOf }: ObservedNets,
  keyOf: (i: number) => number,
  nameOf: (key: number) => string,
): ActivityGroup[] {
  const groups = new Map<number, Map<number, number>>();
  for (let i = 0; i < nets.count; i++) {
    const key = keyOf(i);
    const values = groups.get(key) ?? new Map<number, number>();
    groups.set(key, values);
    const value = literalOf[nets.place[i]!]! >>> 1;
    values.set(value, (values.get(value) ?? 0) + 1);
  }
  return [...groups].map(([key, values]) => ({
    name: nameOf(key),
    netCount: [...values.values()].reduce((sum, count) => sum + count, 0),
    values: Uint32Array.from(values.keys()),
    nets: Uint32Array.from(values.values()),
  }));
}
