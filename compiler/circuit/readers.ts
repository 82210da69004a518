import type { Circuit } from './circuit.js';

/** For each net, who reads it: `reader[start[n]] … reader[start[n + 1] - 1]`. */
export interface Readers {
  /** netCount + 1 entries. */
  readonly start: Uint32Array;
  readonly reader: Uint32Array;
}

/**
 * The nets whose gate has a given net in its fan-in, in net order.
 *
 * A gate that reads a net twice is listed twice. State elements are not listed.
 */
export function gateReaders(circuit: Circuit): Readers {
  const { netCount, faninStart, fanin } = circuit;
  const start = new Uint32Array(netCount + 1);
  for (let i = 0; i < fanin.length; i++) start[fanin[i]! + 1]!++;
  for (let net = 0; net < netCount; net++) start[net + 1]! += start[net]!;
  const reader = new Uint32Array(fanin.length);
  const next = start.slice(0, netCount);
  for (let net = 0; net < netCount; net++) {
    for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) {
      reader[next[fanin[i]!]!++] = net;
    }
  }
  return { start, reader };
}
