import type { Circuit } from '../circuit/circuit.js';
import { isGate } from '../circuit/gates.js';

/**
 * The nets that some nets depend on through gates, those included, each after its fan-in: the cone
 * of one depth first, then what the next one adds.
 *
 * Returns undefined where a net depends on itself through gates alone.
 */
export function settlingOrder(
  { netCount, kind, faninStart, fanin }: Circuit,
  sinks: Iterable<number>,
): Uint32Array | undefined {
  const order: number[] = [];
  const next = faninStart.slice(0, netCount);
  const mark = new Uint8Array(netCount);
  const path: number[] = [];
  for (const sink of sinks) {
    if (mark[sink] === Mark.New) path.push(sink);
    while (path.length > 0) {
      const net = path[path.length - 1]!;
      mark[net] = Mark.Open;
      if (isGate(kind[net]!) && next[net]! < faninStart[net + 1]!) {
        const source = fanin[next[net]!++]!;
        if (mark[source] === Mark.Open) return undefined;
        if (mark[source] === Mark.New) path.push(source);
      } else {
        mark[net] = Mark.Placed;
        order.push(net);
        path.pop();
      }
    }
  }
  return Uint32Array.from(order);
}

const Mark = { New: 0, Open: 1, Placed: 2 } as const;
