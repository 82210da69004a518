import type { Circuit } from '../circuit.js';
import { isGate } from '../gates.js';
import { NO_NET } from '../ids.js';

/**
 * Marks nets with a 1, and all that they depend on through gates. What is marked already is taken
 * as done. `NO_NET` among the nets is passed over.
 */
export function markCone(circuit: Circuit, nets: Iterable<number>, mark: Uint8Array): void {
  const { kind, faninStart, fanin } = circuit;
  const pending: number[] = [];
  const visit = (net: number): void => {
    if (mark[net] === 1) return;
    mark[net] = 1;
    if (isGate(kind[net]!)) pending.push(net);
  };
  for (const net of nets) if (net !== NO_NET) visit(net);
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) visit(fanin[i]!);
  }
}
