import type { Circuit } from './circuit.js';
import { directSources, NOT_DIRECT } from './directSources.js';

/**
 * How many waves of captures one phase of a cycle may take; more is a ring that clocks itself.
 *
 * Every register on a clock that other registers make may need a wave to capture in, and another
 * where an asynchronous reset sends it back.
 */
export function waveLimit(circuit: Circuit): number {
  const direct = directSources(circuit);
  const derived = circuit.registers.clock.filter((pin) => direct[pin] === NOT_DIRECT);
  return 4 + 2 * derived.length;
}
