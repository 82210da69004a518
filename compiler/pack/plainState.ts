import { directSources, NOT_DIRECT } from '../circuit/directSources.js';
import { NO_NET } from '../circuit/ids.js';
import { stateNets } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';

/**
 * State elements, by their net, whose value between two cycles is just what they hold: registers
 * that hang on a clock port and have neither set nor reset.
 *
 * Any other may take another value as soon as inputs change, or before outputs are sampled.
 */
export function plainState({ circuit, clocks, schedule }: Design): ReadonlyMap<number, number> {
  const plain = new Map<number, number>();
  // Clocks with a pace of their own may tick between the start of a cycle and its sampling.
  const isTogether = schedule.shapes.every(({ steps }) => steps[0]?.kind === 'sample');
  if (!isTogether) return plain;
  const { registers } = circuit;
  const clockNets = new Set(clocks.ports.map(({ net }) => net as number));
  const source = directSources(circuit);
  for (const [element, net] of stateNets(circuit).subarray(0, registers.count).entries()) {
    if (registers.set[element] !== NO_NET || registers.reset[element] !== NO_NET) continue;
    const from = source[registers.clock[element]!]!;
    if (from !== NOT_DIRECT && clockNets.has(from >>> 1)) plain.set(net, element);
  }
  return plain;
}
