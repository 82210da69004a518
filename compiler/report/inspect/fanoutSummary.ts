import { mostRead, readCounts } from '../../circuit/analyses/readCounts.js';
import type { Circuit } from '../../circuit/circuit.js';
import { gateInfo } from '../../circuit/gates.js';
import type { NetWords } from './netWords.js';

/** A net that much reads. */
export interface Fanout {
  readonly net: string;
  readonly kind: string;
  /** Inputs of gates, pins of registers and latches, and output bits on it. */
  readonly readers: number;
}

const SHOWN = 8;

/** The eight nets with most readers, constants left out. */
export function largestFanouts(circuit: Circuit, words: NetWords): Fanout[] {
  const counts = readCounts(circuit);
  const kindOf = (net: number) => gateInfo(circuit.kind[net]!);
  return mostRead(counts, SHOWN, (net) => kindOf(net).role !== 'constant').map((net) => ({
    net: words.name(net),
    kind: kindOf(net).name,
    readers: counts[net]!,
  }));
}
