import type { PortLayout, RowLayout } from '../layout.js';
import {
  type Column,
  checkColumn,
  clearUnknown,
  columnWords,
  fillRows,
  type PlacedColumn,
  readRows,
} from './columns.js';
import type { Core } from './core.js';
import { checkNames, type Ports } from './ports.js';
import { checkFields, shown } from './values.js';

/** Columns by port name. */
export type Columns = Readonly<Record<string, Column>>;

/** A block of cycles to run. */
export interface BlockRequest {
  readonly cycles: number;
  /** Values of inputs; those left out hold what they are. */
  readonly stimulus?: Columns;
  /** With x only: a 1 for each bit of the stimulus that is x. */
  readonly unknown?: Columns;
  /** Outputs to record; all unless given. */
  readonly response?: readonly string[];
}

/** What a block of cycles gave. */
export interface BlockResult {
  readonly cycles: number;
  readonly response: Record<string, Uint32Array>;
  /** With x only: a 1 for each bit of the response that is x. */
  readonly unknown?: Record<string, Uint32Array>;
}

// Rows of one call of the engine, so that they stay cached.
const BLOCK_WORDS = 1 << 14;
const MOST_CYCLES = 1024;

/** A block in progress: everything is checked when it is made, `advance` runs it piece by piece. */
export class BlockRun {
  readonly result: BlockResult;
  done = 0;
  readonly #core: Core;
  readonly #cycles: number;
  readonly #stimulus: PlacedColumn[];
  readonly #response: PlacedColumn[];
  readonly #most: number;
  readonly #rows: Uint32Array;
  readonly #sampled: Uint32Array | undefined;

  constructor(core: Core, ports: Ports, request: BlockRequest) {
    const { layout, inputStride, outputStride } = core;
    const { cycles, response = layout.outputs.ports.map(({ name }) => name) } = checkFields(
      request,
      'a request such as { cycles: 1 }',
    );
    this.#core = core;
    this.#cycles = checkCycles(cycles);
    if (request.unknown !== undefined && !layout.threeValued) {
      throw new RangeError('expected no unknown bits in a model of two values, got some');
    }
    const placed = (columns: Columns = {}, group: number): PlacedColumn[] =>
      Object.entries(checkFields(columns, 'columns by port')).map(([name, column]) => {
        const port = ports.input(name);
        return { port, column: checkColumn(port, column, cycles), group };
      });
    this.#stimulus = [
      ...placed(request.stimulus, 0),
      ...placed(request.unknown, layout.inputs.words),
    ];
    const watched = checkNames(response).map((name) => ports.output(name));
    const record = newRecord(watched, cycles);
    const unknown = layout.threeValued ? newRecord(watched, cycles) : undefined;
    this.result = { cycles, response: record, ...(unknown && { unknown }) };
    this.#response = [
      ...placedRecord(watched, record, 0),
      ...placedRecord(watched, unknown, layout.outputs.words),
    ];
    const words = Math.max(1, inputStride, outputStride);
    this.#most = Math.max(1, Math.min(MOST_CYCLES, Math.floor(BLOCK_WORDS / words)));
    this.#rows = new Uint32Array(this.#most * inputStride);
    if (watched.length > 0) this.#sampled = new Uint32Array(this.#most * outputStride);
  }

  get isDone(): boolean {
    return this.done === this.#cycles;
  }

  /** Runs some of the cycles. Throws `RunFault` and what `fillRows` throws. */
  advance(): void {
    const { inputStride: stride, layout, outputStride } = this.#core;
    const cycles = Math.min(this.#most, this.#cycles - this.done);
    if (this.#stimulus.length === 0) {
      this.#core.run(cycles, this.#core.inputs, 0, this.#sampled);
    } else {
      this.#hold(cycles);
      fillRows(this.#rows, stride, this.#stimulus, this.done, cycles);
      if (layout.threeValued) clearUnknown(this.#rows, stride, layout, cycles);
      this.#core.run(cycles, this.#rows, stride, this.#sampled);
    }
    if (this.#sampled) {
      readRows(this.#sampled, outputStride, this.#response, this.done, cycles);
    }
    this.done += cycles;
  }

  // Every row starts as the present inputs; a port with new values has no x unless they say so.
  #hold(cycles: number): void {
    const { inputs, inputStride, layout } = this.#core;
    const held = inputs.slice();
    if (layout.threeValued) {
      for (const { port, group } of this.#stimulus) {
        if (group === 0) clearPort(held, layout.inputs, port);
      }
    }
    for (let i = 0; i < cycles; i++) this.#rows.set(held, i * inputStride);
  }
}

/** Throws RangeError unless the number is a count of cycles. */
export function checkCycles(cycles: unknown): number {
  if (Number.isSafeInteger(cycles) && (cycles as number) >= 0) return cycles as number;
  throw new RangeError(`expected a count of cycles, got ${shown(cycles)}`);
}

function clearPort(row: Uint32Array, { words }: RowLayout, { offset, width }: PortLayout): void {
  for (let bit = words * 32 + offset; bit < words * 32 + offset + width; bit++) {
    row[bit >>> 5]! &= ~(1 << (bit & 31));
  }
}

const newRecord = (ports: readonly PortLayout[], cycles: number): Record<string, Uint32Array> =>
  Object.fromEntries(ports.map((port) => [port.name, new Uint32Array(cycles * columnWords(port))]));

const placedRecord = (
  ports: readonly PortLayout[],
  record: Readonly<Record<string, Uint32Array>> | undefined,
  group: number,
): PlacedColumn[] =>
  record === undefined ? [] : ports.map((port) => ({ port, column: record[port.name]!, group }));
