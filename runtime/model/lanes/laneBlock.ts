import type { PortLayout } from '../../layout.js';
import { checkCycles } from '../block.js';
import {
  type Column,
  checkColumn,
  clearUnknown,
  columnWords,
  fillRows,
  type PlacedColumn,
  readRows,
} from '../columns.js';
import { checkNames, type Ports } from '../ports.js';
import { checkFields } from '../values.js';
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
  const placed = Array.from({ length: lanes }, (_, lane) => [
    ...placedRecord(watched, record, lane, 0),
    ...placedRecord(watched, unknown, lane, outputs.words),
  ]);
  const sampled =
    watched.length > 0
      ? new Uint32Array(Math.min(CALL_CYCLES, cycles) * core.out.stride)
      : undefined;
  const start = core.ticks;
  for (let done = 0; done < cycles; ) {
    const count = Math.min(CALL_CYCLES, cycles - done);
    stimulus.run(done, count, sampled);
    if (sampled) {
      const rows = core.out.unpackAll(sampled, count);
      rows.forEach((row, lane) => {
        readRows(row, core.outputStride, placed[lane]!, done, count);
      });
    }
    done += count;
  }
  for (const [lane, tick] of core.ends()) {
    const from = Math.max(0, tick - start);
    for (const { port, column } of placed[lane]!) column.fill(0, from * columnWords(port));
  }
  return { cycles, response: record, ...(unknown && { unknown }) };
}

/** The inputs of a block, piece by piece. */
class Stimulus {
  readonly #core: LaneCore;
  /** The columns of each lane; undefined where no input gets new values. */
  readonly #columns: readonly (readonly PlacedColumn[])[] | undefined;
  /** Whether all lanes get the same inputs. */
  readonly #isAlike: boolean;

  constructor(core: LaneCore, ports: Ports, { cycles, stimulus, unknown }: LaneRequest) {
    this.#core = core;
    const { inputs } = core.layout;
    const given = [
      ...this.#placed(ports, stimulus, cycles, 0),
      ...this.#placed(ports, unknown, cycles, inputs.words),
    ];
    this.#isAlike = core.isAlike && given.every(({ length }) => length === 1);
    if (given.length === 0) return;
    this.#columns = Array.from({ length: core.lanes }, (_, lane) =>
      given.map((columns) => columns[lane % columns.length]!),
    );
  }

  /** Runs `cycles` cycles from cycle `first` of the block on. */
  run(first: number, cycles: number, sampled: Uint32Array | undefined): void {
    const columns = this.#columns;
    if (columns === undefined) this.#core.hold(cycles, sampled);
    else if (this.#isAlike) this.#core.runAlike(cycles, this.#rows(0, first, cycles), sampled);
    else {
      const rows = columns.map((_, lane) => this.#rows(lane, first, cycles));
      this.#core.run(cycles, rows, sampled);
    }
  }

  // One column for all lanes, or one for each.
  #placed(
    ports: Ports,
    columns: LaneColumns = {},
    cycles: number,
    group: number,
  ): PlacedColumn[][] {
    const { lanes } = this.#core;
    return Object.entries(checkFields(columns, 'columns by port')).map(([name, given]) => {
      const port = ports.input(name);
      const each = Array.isArray(given) ? given : [given];
      if (Array.isArray(given) && given.length !== lanes) {
        throw new RangeError(
          `${name} takes a column, or one for each of ${lanes} lanes, got ${given.length}`,
        );
      }
      return each.map((column) => ({ port, column: checkColumn(port, column, cycles), group }));
    });
  }

  // Packed rows of a lane: its present inputs, and over them what its columns say.
  #rows(lane: number, first: number, cycles: number): Uint32Array {
    const { layout, inputStride: stride } = this.#core;
    const columns = this.#columns![lane]!;
    const rows = new Uint32Array(cycles * stride);
    const held = this.#core.inputs(lane).slice();
    const { words } = layout.inputs;
    for (const { port, group } of columns) {
      if (!layout.threeValued || group !== 0) continue;
      for (let bit = words * 32 + port.offset, i = 0; i < port.width; i++, bit++) {
        held[bit >>> 5]! &= ~(1 << (bit & 31));
      }
    }
    for (let i = 0; i < cycles; i++) rows.set(held, i * stride);
    fillRows(rows, stride, columns, first, cycles);
    if (layout.threeValued) clearUnknown(rows, stride, layout, cycles);
    return rows;
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
  lane: number,
  group: number,
): PlacedColumn[] =>
  record === undefined
    ? []
    : ports.map((port) => ({ port, column: record[port.name]![lane]!, group }));
