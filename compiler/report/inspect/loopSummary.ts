import { loopPath } from '../../circuit/analyses/loopPath.js';
import type { Circuit } from '../../circuit/circuit.js';
import { loopsOf, SettlingSources } from '../../circuit/loops.js';

/** A combinational loop: how many nets depend on one another, and a way round. */
export interface LoopSummary {
  readonly size: number;
  /** Nets in the direction in which values flow; the last leads back to the first. */
  readonly path: readonly number[];
}

/** The first `limit` loops of a circuit, each with the shortest way round from its first net. */
export function loopSummaries(circuit: Circuit, limit: number): LoopSummary[] {
  const loops = loopsOf(circuit);
  if (loops.nets.length === 0) return [];
  const sources = new SettlingSources(circuit);
  return loops.nets.slice(0, limit).map((nets, loop) => ({
    size: nets.length,
    path: loopPath(loops, sources, loop),
  }));
}
