import { scopePath } from '../circuit/hierarchy.js';
import type { ActivitySummary } from '../run/outlets/activitySummary.js';
import type { NetActivity } from './netActivity.js';
import { blocksOf, ownedName, ownedNets } from './ownedNets.js';

/** Nets and blocks named in a summary. */
const SHOWN = 6;

/** What stands out of an activity. */
export function summaryOf(activity: NetActivity): ActivitySummary {
  const { design, list, cycles } = activity;
  const { circuit } = design;
  const nets = ownedNets(list, (place) => activity.isClock(place));
  const toggles = Float64Array.from(nets.place, (place) => activity.toggles(place));
  const nameOf = (i: number): string => ownedName(circuit.hierarchy, list, nets, i);
  const still = Array.from(toggles.keys()).filter((i) => toggles[i] === 0);
  const busiest = Array.from(toggles.keys())
    .filter((i) => toggles[i]! > 0)
    .sort((p, q) => toggles[q]! - toggles[p]! || p - q)
    .slice(0, SHOWN);
  const scopes = blocksOf(circuit.hierarchy, list, nets);
  const blocks = new Map<number, { nets: number; toggles: number }>();
  for (let i = 0; i < nets.count; i++) {
    const scope = scopes[i]!;
    const block = blocks.get(scope) ?? { nets: 0, toggles: 0 };
    block.nets++;
    block.toggles += toggles[i]!;
    blocks.set(scope, block);
  }
  const busiestBlocks = [...blocks]
    .sort(([, p], [, q]) => q.toggles - p.toggles)
    .slice(0, SHOWN)
    .map(([scope, block]) => ({
      name: scopePath(circuit.hierarchy, scope) || circuit.name,
      ...block,
    }));
  return {
    ...{ cycles, nets: nets.count },
    toggles: toggles.reduce((sum, count) => sum + count, 0),
    neverToggled: still.length,
    still: still.slice(0, SHOWN).map(nameOf),
    busiestNets: busiest.map((i) => ({ name: nameOf(i), toggles: toggles[i]! })),
    busiestBlocks,
  };
}
