import type { Circuit } from '../circuit.js';
import { NO_NET } from '../ids.js';
import { memoryPins } from '../memoryPorts.js';

/** For each net, how many read it: inputs of gates, pins of state elements, output bits. */
export function readCounts(circuit: Circuit): Uint32Array {
  const { fanin, outputs } = circuit;
  const counts = new Uint32Array(circuit.netCount);
  const add = (nets: Uint32Array): void => {
    for (let i = 0; i < nets.length; i++) if (nets[i] !== NO_NET) counts[nets[i]!]!++;
  };
  add(fanin);
  for (const pins of statePins(circuit)) add(pins);
  for (const { nets } of outputs) add(nets);
  return counts;
}

/** The columns of all pins by which registers, latches and write ports of memories read nets. */
export function statePins(
  circuit: Pick<Circuit, 'registers' | 'latches' | 'memories'>,
): readonly Uint32Array[] {
  const { registers, latches } = circuit;
  return [
    ...[registers.data, registers.clock, registers.set, registers.reset],
    ...[latches.data, latches.enable, latches.set, latches.reset],
    memoryPins(circuit),
  ];
}

/** The `limit` nets with the most readers for which `counts` holds, most read first. */
export function mostRead(
  counts: Uint32Array,
  limit: number,
  suits: (net: number) => boolean,
): number[] {
  const found: number[] = [];
  for (let net = 0; net < counts.length; net++) {
    const count = counts[net]!;
    const isFull = found.length === limit;
    if (count === 0 || (isFull && count <= counts[found[limit - 1]!]!) || !suits(net)) continue;
    if (isFull) found.pop();
    let place = found.length;
    while (place > 0 && counts[found[place - 1]!]! < count) place--;
    found.splice(place, 0, net);
  }
  return found;
}
