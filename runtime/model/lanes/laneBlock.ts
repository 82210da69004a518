import type { PortLayout } from '../../layout.js';
import { checkCycles } from '../block.js';
import { type Column, checkColumn, columnWords } from '../columns.js';
import { checkNames, type Ports } from '../ports.js';
import { checkFields } from '../values.js';
import { fillLanes, type LaneColumn, readLanes } from './laneColumns.js';
import type { LaneCore } from './laneCore.js';

/** Columns by port name: one for all lanes, or a list with one for each. */
export type LaneColumns = Readonly<Record<string, Column | readonly Column[]>>;

/** A block of cycles to run in all lanes. */
export interface LaneRequest {
  readonly cycles: number;
  /** Values of inputs; those left out hold what they are in each lane. */
  readonly stimulus?: LaneColumns;
  /** With x only: a 1 for each bit of the stimulus that is x. */
  readonly unknown?: LaneColumns;
  /** Outputs to record; all unless given. */
  readonly response?: readonly string[];
}

/** What a block of cycles gave: for each output a column for each lane. */
export interface LaneResult {
  readonly cycles: number;
  readonly response: Record<string, Uint32Array[]>;
  /** With x only: a 1 for each bit of the response that is x. */
  readonly unknown?: Record<string, Uint32Array[]>;
}

/** Cycles of one call of the engine, so that rows of all lanes stay cached. */
const CALL_CYCLES = 128;

/**
 * Runs a block of cycles in all lanes. What a lane would give after it has ended is 0. Throws what
 * `BlockRun` throws for wrong requests.
 */
export function runLanes(core: LaneCore, ports: Ports, request: LaneRequest): LaneResult {
  const { layout, lanes } = core;
  const { outputs, threeValued } = layout;
  const names = outputs.ports.map(({ name }) => name);
  const { response = names, ...given } = checkFields(request, 'a request such as { cycles: 1 }');
  const cycles = checkCycles(given.cycles);
  if (given.unknown !== undefined && !threeValued) {
    throw new RangeError('expected no unknown bits in a model of two values, got some');
  }
  const stimulus = new Stimulus(core, ports, given);
  const watched = checkNames(response).map((name) => ports.output(name));
  const record = newRecord(watched, cycles, lanes);
  const unknown = threeValued ? newRecord(watched, cycles, lanes) : undefined;
  const placed = [...placedRecord(watched, record, 0), ...placedRecord(watched, unknown, 1)];
  const shape = { row: outputs, lanes, stride: core.out.stride };
  const sampled =
    watched.length > 0
      ? new Uint32Array(Math.min(CALL_CYCLES, cycles) * core.out.stride)
      : undefined;
  const start = core.ticks;
  for (let done = 0; done < cycles; ) {
    const count = Math.min(CALL_CYCLES, cycles - done);
    stimulus.run(done, count, sampled);
    if (sampled) readLanes(sampled, shape, placed, done, count);
    done += count;
  }
  for (const [lane, tick] of core.ends()) {
    const from = Math.max(0, tick - start);
    for (const { port, columns } of placed) columns[lane]!.fill(0, from * columnWords(port));
  }
  return { cycles, response: record, ...(unknown && { unknown }) };
}

/** The inputs of a block, piece by piece. */
class Stimulus {
  readonly #core: LaneCore;
  readonly #columns: readonly LaneColumn[];
  readonly #rows: Uint32Array;

  constructor(core: LaneCore, ports: Ports, { cycles, stimulus, unknown }: LaneRequest) {
    this.#core = core;
    this.#columns = [
      ...this.#placed(ports, stimulus, cycles, 0),
      ...this.#placed(ports, unknown, cycles, 1),
    ];
    const { length } = this.#columns;
    this.#rows = new Uint32Array(length && Math.min(CALL_CYCLES, cycles) * core.into.stride);
  }

  /** Runs `cycles` cycles from cycle `first` of the block on. */
  run(first: number, cycles: number, sampled: Uint32Array | undefined): void {
    if (this.#columns.length === 0) {
      this.#core.hold(cycles, sampled);
      return;
    }
    const { layout, lanes, into } = this.#core;
    const rows = this.#rows;
    const shape = { row: layout.inputs, lanes, stride: into.stride };
    const held = this.#held();
    for (let i = 0; i < cycles; i++) rows.set(held, i * into.stride);
    fillLanes(rows, shape, this.#columns, first, cycles);
    if (layout.threeValued) clearUnknown(rows, into.stride, cycles);
    this.#core.run(cycles, rows, sampled);
  }

  // Every row starts as the present inputs; a port with new values has no x unless they say so.
  #held(): Uint32Array {
    const { layout, lanes } = this.#core;
    const held = this.#core.heldRow().slice();
    if (!layout.threeValued) return held;
    const parts = lanes >>> 5;
    for (const { port, group } of this.#columns) {
      if (group !== 0) continue;
      const from = (layout.inputs.bits + port.offset) * parts;
      held.fill(0, from, from + port.width * parts);
    }
    return held;
  }

  // One column for all lanes, or one for each.
  #placed(ports: Ports, columns: LaneColumns = {}, cycles: number, group: 0 | 1): LaneColumn[] {
    const { lanes } = this.#core;
    return Object.entries(checkFields(columns, 'columns by port')).map(([name, given]) => {
      const port = ports.input(name);
      const isEach = Array.isArray(given);
      if (isEach && given.length !== lanes) {
        throw new RangeError(
          `${name} takes a column, or one for each of ${lanes} lanes, got ${given.length}`,
        );
      }
      const each: readonly unknown[] = isEach ? given : [given];
      return { port, columns: each.map((column) => checkColumn(port, column, cycles)), group };
    });
  }
}

/** Bits that are x have value 0: the second half of a lane row tells which are. */
function clearUnknown(rows: Uint32Array, stride: number, cycles: number): void {
  const half = stride / 2;
  for (let at = 0; at < cycles * stride; at += stride) {
    for (let i = at; i < at + half; i++) rows[i]! &= ~rows[i + half]!;
  }
}

const newRecord = (
  ports: readonly PortLayout[],
  cycles: number,
  lanes: number,
): Record<string, Uint32Array[]> =>
  Object.fromEntries(
    ports.map((port) => [
      port.name,
      Array.from({ length: lanes }, () => new Uint32Array(cycles * columnWords(port))),
    ]),
  );

const placedRecord = (
  ports: readonly PortLayout[],
  record: Readonly<Record<string, readonly Uint32Array[]>> | undefined,
  group: 0 | 1,
): LaneColumn[] =>
  record === undefined ? [] : ports.map((port) => ({ port, columns: record[port.name]!, group }));
