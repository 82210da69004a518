import { buildFlipFlop } from './flipFlopPrimitive.js';
import { buildLatch } from './latchPrimitive.js';
import type { SequentialTable } from './primitiveTable.js';
import type { Recording } from './recording.js';
import type { StatePins } from './statePins.js';
import { TableBehaviour } from './tableBehaviour.js';

/**
 * Builds a sequential primitive as a flip-flop or a latch, by what its table does for every
 * combination and every change of its inputs (IEEE 1364-2005, clauses 8.4 to 8.9).
 *
 * An input whose every change makes the output x, as one that reports timing violations, is taken
 * never to change. Returns the reason where the table is neither.
 */
export function lowerSequential(
  table: SequentialTable,
  pins: StatePins,
  recording: Recording,
): string | undefined {
  const behaviour = new TableBehaviour(table);
  const clocks = behaviour.clocks();
  if (clocks.length > 1) {
    const names = [...new Set(clocks.map(({ input }) => pins.names[input]))];
    const what = names.length === 1 ? `both edges of ${names[0]}` : `edges of ${names.join(', ')}`;
    return `${what} give it a new value; use always blocks in its place`;
  }
  const [clock] = clocks;
  return clock === undefined
    ? buildLatch(behaviour, pins, recording)
    : buildFlipFlop(behaviour, clock, pins, recording);
}
