import { ClockPath, type ClockRoots, portEdge } from '../../circuit/analyses/clockRoots.js';
import { Edge } from '../../circuit/circuit.js';
import type { Design } from '../../compile.js';
import { gatedClocks } from './gatedClocks.js';
import type { NetWords } from './netWords.js';

/** A clock port and what hangs on it. What hangs on several is counted with each. */
export interface ClockSummary {
  readonly port: string;
  /** All registers; the sum of the next four. */
  readonly registers: number;
  /** Registers with the port itself as their clock. */
  readonly direct: number;
  /** Behind buffers and inverters alone. */
  readonly buffered: number;
  /** Behind gates that other signals have a say in. */
  readonly gated: number;
  /** On clocks that other registers or latches make. */
  readonly divided: number;
  /** Registers, divided ones left out, that capture when the port falls. */
  readonly falling: number;
  /** Latches that it opens and closes, itself or through gates. */
  readonly latches: number;
  /** The first eight gated nets among the clock pins. */
  readonly gatedNets: readonly { readonly net: string; readonly registers: number }[];
}

const SHOWN = 8;

/** Counts what hangs on each clock port, ports in declaration order. */
export function clockSummaries(
  { circuit, clocks }: Design,
  roots: ClockRoots,
  words: NetWords,
): ClockSummary[] {
  const counts = clocks.ports.map(() => ({
    path: [0, 0, 0, 0, 0],
    falling: 0,
    latches: 0,
  }));
  for (let r = 0; r < circuit.registers.count; r++) {
    const isFalling = portEdge(circuit, roots, r) === Edge.Falling;
    for (const port of roots.sets.members(roots.registers.roots[r]!)) {
      counts[port]!.path[roots.registers.path[r]!]!++;
      if (isFalling) counts[port]!.falling++;
    }
  }
  for (const set of roots.latches.roots) {
    for (const port of roots.sets.members(set)) counts[port]!.latches++;
  }
  const gated = gatedClocks(circuit, roots);
  return clocks.ports.map(({ name }, port) => {
    const { path, falling, latches } = counts[port]!;
    return {
      port: name,
      registers: path.reduce((sum, each) => sum + each, 0),
      direct: path[ClockPath.Direct]!,
      buffered: path[ClockPath.Buffered]!,
      gated: path[ClockPath.Gated]!,
      divided: path[ClockPath.Divided]!,
      falling,
      latches,
      gatedNets: gated
        .filter(({ net }) => roots.sets.members(roots.reaching[net]!).includes(port))
        .slice(0, SHOWN)
        .map(({ net, registers }) => ({ net: words.name(net), registers })),
    };
  });
}
