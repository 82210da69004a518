import type { Circuit } from './circuit.js';
import { isGate } from './gates.js';
import { gateReaders } from './readers.js';

/**
 * The level of each net: 0 for inputs, constants, registers and latches; for a gate one more than
 * the highest of its fan-in. Gates on a combinational loop, and behind one, get the level 0.
 *
 * Topological levels after Kahn, "Topological sorting of large networks", CACM 5(11), 1962.
 */
export function levelsOf(circuit: Circuit): Uint32Array {
  const { netCount, kind, faninStart } = circuit;
  const { start, reader } = gateReaders(circuit);
  const waiting = new Uint32Array(netCount);
  const reached = new Uint32Array(netCount);
  const level = new Uint32Array(netCount);
  const ready = new Uint32Array(netCount);
  let readyCount = 0;
  for (let net = 0; net < netCount; net++) {
    waiting[net] = faninStart[net + 1]! - faninStart[net]!;
    if (!isGate(kind[net]!)) ready[readyCount++] = net;
  }
  for (let next = 0; next < readyCount; next++) {
    const net = ready[next]!;
    level[net] = reached[net]!;
    for (let i = start[net]!; i < start[net + 1]!; i++) {
      const gate = reader[i]!;
      if (reached[gate]! <= level[net]!) reached[gate] = level[net]! + 1;
      if (--waiting[gate]! === 0) ready[readyCount++] = gate;
    }
  }
  return level;
}
