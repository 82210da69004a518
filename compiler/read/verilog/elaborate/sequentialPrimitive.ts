import { Edge } from '../../../circuit/circuit.js';
import { sequentialTable, type TableRoles } from '../../../circuit/tables/cellTable.js';
import type { EventSource } from '../../../circuit/tables/tableEvents.js';
import { asynchronousOf, buildAsynchronous } from './asynchronous.js';
import { buildFlipFlop, dataOf } from './flipFlopPrimitive.js';
import { buildLatch } from './latchPrimitive.js';
import type { SequentialTable } from './primitiveTable.js';
import type { Recording } from './recording.js';
import type { StatePins } from './statePins.js';
import { TableBehaviour } from './tableBehaviour.js';

/** A table with state that is to be built. */
export interface SequentialCell {
  readonly name: string;
  /** What it says of inputs and states of 0 and 1. */
  readonly table: SequentialTable;
  readonly source: EventSource;
  /** Whether `source` says more of x than a register or latch does. */
  readonly isExact: boolean;
}

/**
 * Builds a sequential primitive as a flip-flop or a latch, by what its table does for every
 * combination and every change of its inputs (IEEE 1364-2005, clauses 8.3 to 8.8).
 *
 * An input whose every change makes the output x, as one that reports timing violations, is taken
 * never to change in two-valued runs. Where the table is neither, the recording gets the table,
 * beside a register or latch that holds its state. Returns then what to say about it.
 */
export function lowerSequential(
  cell: SequentialCell,
  pins: StatePins,
  recording: Recording,
): string | undefined {
  const behaviour = new TableBehaviour(cell.table);
  const clocks = behaviour.clocks();
  const reason = buildRecognized(behaviour, clocks, pins, recording);
  const addTable = (roles: TableRoles, reads: readonly number[]): void => {
    const { output, inputs } = pins;
    recording.tables.push({
      output,
      inputs,
      reads: reads.map((place) => inputs[place]!),
      table: sequentialTable(cell.name, inputs.length, cell.source, roles),
    });
  };
  const isLatch = reason === undefined && clocks.length > 1;
  const ticking = reason === undefined ? clocks : clocks.filter((edge) => behaviour.ticks(edge));
  const roles = {
    ...behaviour.levels(),
    clocks: isLatch ? [] : [...new Set(ticking.map(({ input }) => input))],
  };
  if (reason === undefined) {
    if (cell.isExact) addTable({ ...roles, isRecognized: true, edges: [] }, []);
    return undefined;
  }
  buildHolder(behaviour, pins, recording);
  const edges = ticking.map(({ input, value }) => ({
    input,
    edge: value === 1 ? Edge.Rising : Edge.Falling,
  }));
  addTable({ ...roles, isRecognized: false, edges }, behaviour.live);
  const unknown = behaviour.becomesUnknown()
    ? '; what it makes x reads as 0 in two-valued runs'
    : '';
  return `is neither a flip-flop nor a latch: ${reason}. It runs from its table${unknown}`;
}

/** Returns why the table is neither flip-flop nor latch; undefined once it is built as one. */
function buildRecognized(
  behaviour: TableBehaviour,
  clocks: ReturnType<TableBehaviour['clocks']>,
  pins: StatePins,
  recording: Recording,
): string | undefined {
  if (clocks.length > 1) {
    // A latch may be written by the edges of all its inputs.
    if (buildLatch(behaviour, pins, recording) === undefined) return undefined;
    const names = [...new Set(clocks.map(({ input }) => pins.names[input]))];
    const what = names.length === 1 ? `both edges of ${names[0]}` : `edges of ${names.join(', ')}`;
    return `${what} give it a new value`;
  }
  const [clock] = clocks;
  return clock === undefined
    ? buildLatch(behaviour, pins, recording)
    : buildFlipFlop(behaviour, clock, pins, recording);
}

/**
 * A register or latch that holds the state, with pins as near to the table as it can have them, by
 * which clocks are found and paths are measured.
 */
function buildHolder(behaviour: TableBehaviour, pins: StatePins, recording: Recording): void {
  const { inputs, output, initial } = pins;
  const asynchronous = asynchronousOf(behaviour.given());
  const controls = buildAsynchronous(asynchronous, inputs, recording);
  const clock = behaviour.clocks().find((edge) => behaviour.ticks(edge));
  if (clock === undefined) {
    recording.latch({ output, ...controls, initial });
    return;
  }
  recording.register({
    output,
    clock: inputs[clock.input]!,
    edge: clock.value === 1 ? Edge.Rising : Edge.Falling,
    data: dataOf(behaviour, clock, asynchronous, pins, recording),
    ...controls,
    initial,
  });
}
