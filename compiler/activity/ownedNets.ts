import { bitName, type Hierarchy } from '../circuit/hierarchy.js';
import { type SignalList, signalAt } from '../waveform/signalList.js';

/**
 * The nets of a list, each once, by the name nearest to the top: entry i of each array is about the
 * same net.
 */
export interface OwnedNets {
  readonly count: number;
  /** Place of the net among those of the list. */
  readonly place: Uint32Array;
  /** Entry of the list that names it. */
  readonly entry: Uint32Array;
}

/** The nets of a list but for those at places of which `isLeftOut` says so. */
export function ownedNets(list: SignalList, isLeftOut: (place: number) => boolean): OwnedNets {
  const owner = new Map<number, readonly [place: number, entry: number]>();
  // Scopes stand parent first; patterns may have brought a lower one before its parent.
  for (let entry = 0; entry < list.count; entry++) {
    for (let bit = 0; bit < list.width[entry]!; bit++) {
      const place = list.place[entry]! + bit;
      if (isLeftOut(place)) continue;
      const net = list.nets[place]!;
      const known = owner.get(net);
      if (known !== undefined && list.scope[known[1]]! <= list.scope[entry]!) continue;
      owner.set(net, [place, entry]);
    }
  }
  const places = [...owner.values()];
  return {
    count: places.length,
    place: Uint32Array.from(places, ([place]) => place),
    entry: Uint32Array.from(places, ([, entry]) => entry),
  };
}

/** The name of the i-th of these nets. */
export function ownedName(
  hierarchy: Hierarchy,
  list: SignalList,
  { place, entry }: OwnedNets,
  i: number,
): string {
  const at = entry[i]!;
  const signal = signalAt(hierarchy, list.scope[at]!, list.signal[at]!);
  const bit = list.low[at]! + place[i]! - list.place[at]!;
  return bitName(hierarchy, list.scope[at]!, signal, bit);
}

/** Blocks that are told apart at most. */
const MOST_BLOCKS = 40;

/**
 * For each of these nets the instance that it belongs to, a scope. Where there are too many, the
 * deepest ones are joined with those around them, the cells of a netlist before all.
 */
export function blocksOf(
  { scopeParent }: Hierarchy,
  list: SignalList,
  { entry }: OwnedNets,
): Uint32Array {
  const depth = new Uint32Array(scopeParent.length);
  for (let scope = 1; scope < depth.length; scope++) depth[scope] = depth[scopeParent[scope]!]! + 1;
  const blocks = Uint32Array.from(entry, (at) => list.scope[at]!);
  const deepest = blocks.reduce((most, scope) => Math.max(most, depth[scope]!), 0);
  for (let level = deepest; new Set(blocks).size > MOST_BLOCKS; level--) {
    for (let i = 0; i < blocks.length; i++) {
      if (depth[blocks[i]!]! >= level) blocks[i] = scopeParent[blocks[i]!]!;
    }
  }
  return blocks;
}
