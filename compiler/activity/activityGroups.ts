import { scopePath } from '../circuit/hierarchy.js';
import type { Design } from '../compile.js';
import { type SignalList, signalName } from '../waveform/signalList.js';
import type { ValueGroup } from './activityCourse.js';
import type { ObservedNets } from './observedNets.js';
import { type OwnedNets, ownedNets } from './ownedNets.js';

/** Blocks in a picture; deeper levels of the hierarchy are joined until there are no more. */
const MOST_BLOCKS = 40;

/** Signals that are told apart where a circuit has one block alone. */
const MOST_SIGNALS = 2000;

/** Nets that are shown together. */
export interface ActivityGroup extends ValueGroup {
  readonly name: string;
  readonly netCount: number;
}

/**
 * The nets of a list in groups: by instance, as deep as there is room for; by signal where there is
 * one instance alone.
 */
export function activityGroups(
  { circuit }: Design,
  list: SignalList,
  observed: ObservedNets,
): ActivityGroup[] {
  const { hierarchy } = circuit;
  const nets = ownedNets(list, (place) => observed.clockOf[place]! >= 0);
  const scopes = Uint32Array.from(nets.entry, (entry) => list.scope[entry]!);
  const blocks = blocksOf(hierarchy.scopeParent, scopes);
  const names = new Set(blocks);
  if (names.size > 1) {
    const name = (scope: number) => scopePath(hierarchy, scope) || circuit.name;
    return grouped(nets, observed, (i) => blocks[i]!, name);
  }
  if (new Set(nets.entry).size <= MOST_SIGNALS) {
    const name = (entry: number) => signalName(hierarchy, list, entry);
    return grouped(nets, observed, (i) => nets.entry[i]!, name);
  }
  return grouped(
    nets,
    observed,
    () => 0,
    () => circuit.name,
  );
}

// Of each scope the ancestor at the greatest depth at which there are few enough.
function blocksOf(parent: Uint32Array, scopes: Uint32Array): Uint32Array {
  const depth = new Uint32Array(parent.length);
  for (let scope = 1; scope < parent.length; scope++) depth[scope] = depth[parent[scope]!]! + 1;
  const deepest = scopes.reduce((most, scope) => Math.max(most, depth[scope]!), 0);
  const joined = scopes.slice();
  for (let level = deepest; new Set(joined).size > MOST_BLOCKS; level--) {
    for (let i = 0; i < joined.length; i++) {
      if (depth[joined[i]!]! >= level) joined[i] = parent[joined[i]!]!;
    }
  }
  return joined;
}

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
