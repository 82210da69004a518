import type { Circuit } from './circuit.js';
import { directSources, NOT_DIRECT } from './directSources.js';
import { clockPins } from './memoryPorts.js';
import { pulsesOf } from './pulses.js';
import { ActiveTables } from './tables/activeTables.js';

/**
 * How many waves of captures one phase of a cycle may take; more is a ring that clocks itself.
 *
 * Every register or memory on a clock that others make may need a wave to capture in, and another
 * where an asynchronous reset sends it back. Cells that go by a table may need them too, and
 * registers that set or reset themselves.
 */
export function waveLimit(circuit: Circuit, threeValued: boolean): number {
  const direct = directSources(circuit);
  const derived = clockPins(circuit).clock.filter((pin) => direct[pin] === NOT_DIRECT);
  const tables = new ActiveTables(circuit, threeValued);
  const moved = tables.entries.filter((entry) =>
    tables.movers(entry).some((place) => direct[tables.input(entry, place)] === NOT_DIRECT),
  );
  const { delayed } = pulsesOf(circuit);
  return 4 + 2 * (derived.length + moved.length + delayed.length);
}
