import type { Circuit } from '../circuit.js';
import { isGate } from '../gates.js';
import { NO_NET } from '../ids.js';
import { statePins } from './readCounts.js';

/**
 * The nets of one of the longest paths through gates, from its source to its last gate; empty
 * where no gate has a level. Paths that end at a state element or an output come first.
 *
 * `level` is that of `levelsOf`.
 */
export function deepestPath(circuit: Circuit, level: Uint32Array): Uint32Array {
  const { outputs, kind, faninStart, fanin } = circuit;
  let last = -1;
  const offer = (net: number): void => {
    if (net !== NO_NET && level[net]! > (last < 0 ? 0 : level[last]!)) last = net;
  };
  for (const { nets } of outputs) nets.forEach(offer);
  for (const pins of statePins(circuit)) pins.forEach(offer);
  for (let net = 0; net < level.length; net++) offer(net);
  if (last < 0) return new Uint32Array(0);
  const path = new Uint32Array(level[last]! + 1);
  for (let net = last, place = path.length - 1; ; place--) {
    path[place] = net;
    if (!isGate(kind[net]!)) return path;
    const sources = fanin.subarray(faninStart[net]!, faninStart[net + 1]!);
    net = sources.find((source) => level[source] === level[net]! - 1)!;
  }
}
