import type { Circuit } from './circuit.js';
import { GateKind, gateInfo } from './gates.js';

/** Bit of an entry of `directSources` that says that the input arrives inverted. */
export const INVERTED = 1;

/** Entry of `directSources` for a net that is no mere copy of an input. */
export const NOT_DIRECT = 0xffffffff;

/**
 * For each net that an input reaches through buffers and inverters alone: twice the input's net,
 * plus `INVERTED` after an odd number of inversions. `NOT_DIRECT` for all other nets.
 *
 * A gate of one input counts as the buffer or inverter that it is.
 */
export function directSources(circuit: Circuit): Uint32Array {
  const { netCount, kind, faninStart, fanin } = circuit;
  const source = new Uint32Array(netCount);
  const known = new Uint8Array(netCount);
  const path: number[] = [];
  for (let first = 0; first < netCount; first++) {
    let net = first;
    // A ring of buffers ends at its own first net, which is marked and still has no source.
    while (!known[net]) {
      known[net] = 1;
      source[net] = kind[net] === GateKind.Input ? net * 2 : NOT_DIRECT;
      const start = faninStart[net]!;
      if (faninStart[net + 1]! - start !== 1 || kind[net] === GateKind.MemoryRead) break;
      path.push(net);
      net = fanin[start]!;
    }
    for (let next = path.pop(); next !== undefined; next = path.pop()) {
      const inverted = gateInfo(kind[next]!).fold?.inverted ? INVERTED : 0;
      const before = source[net]!;
      source[next] = before === NOT_DIRECT ? NOT_DIRECT : (before ^ inverted) >>> 0;
      net = next;
    }
  }
  return source;
}
