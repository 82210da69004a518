import type { ModelLayout } from '../layout.js';
import type { BitWeight } from '../weightedStimulus.js';
import { columnOf, overlap, type PortColumn } from './columns.js';

/**
 * Weights of input ports by name (`port`, `port[3]`, `port[7:4]`), each the probability of a 1.
 *
 * Throws RangeError for what is no input port, for a clock, and for two that share a bit.
 */
export function bitWeights(
  { inputs, clocks }: ModelLayout,
  weights: ReadonlyMap<string, number>,
): BitWeight[] {
  const columns = [...weights.keys()].map((name, field): PortColumn => {
    if (clocks.includes(name)) throw new RangeError(`${name} is a clock: it ticks by itself`);
    const column = columnOf(name, field, inputs);
    if (typeof column === 'string') throw new RangeError(column);
    return column;
  });
  const shared = overlap(columns);
  if (shared) throw new RangeError(`${shared[1].name} shares bits with ${shared[0].name}`);
  const [...probabilities] = weights.values();
  return columns.map(({ offset, width }, i) => ({
    ...{ offset, width, probability: probabilities[i]! },
  }));
}
