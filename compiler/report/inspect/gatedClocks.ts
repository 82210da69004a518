import { ClockPath, type ClockRoots } from '../../circuit/analyses/clockRoots.js';
import type { Circuit } from '../../circuit/circuit.js';

/** A net on clock pins that a clock port reaches through gates with other inputs. */
export interface GatedClock {
  readonly net: number;
  readonly registers: number;
}

/** The gated clock nets, in the order of the first register on each. */
export function gatedClocks({ registers }: Circuit, roots: ClockRoots): GatedClock[] {
  const counts = new Map<number, number>();
  for (let r = 0; r < registers.count; r++) {
    if (roots.registers.path[r] !== ClockPath.Gated) continue;
    const net = registers.clock[r]!;
    counts.set(net, (counts.get(net) ?? 0) + 1);
  }
  return Array.from(counts, ([net, count]) => ({ net, registers: count }));
}
