import type { Circuit } from '../circuit.js';
import { type ClockPins, clockPins } from '../memoryPorts.js';

/** The clock pins of all that captures at edges, cells with several clocks or edges included. */
export function capturingPins(circuit: Circuit): ClockPins {
  const { tables } = circuit;
  const pins = clockPins(circuit);
  if (tables.definitions.every(({ edges }) => edges.length === 0)) return pins;
  const clock = [...pins.clock];
  const edge = [...pins.edge];
  for (let entry = 0; entry < tables.count; entry++) {
    for (const each of tables.definitions[tables.definition[entry]!]!.edges) {
      clock.push(tables.input[tables.inputStart[entry]! + each.input]!);
      edge.push(each.edge);
    }
  }
  return { clock: Uint32Array.from(clock), edge: Uint8Array.from(edge) };
}
