import { type ModelLayout, type PortLayout, rowStride } from '../../layout.js';
import { readBits } from '../../rowBits.js';
import type { RunBlock } from '../../stream.js';
import { formatValue } from '../../valueText.js';
import { columnOf, type PortColumn } from '../columns.js';
import type { Departure, ResponseChecker } from '../departure.js';
import { ExpectedValue } from './expectedValue.js';
import { UserModule } from './loadModule.js';
import { InputSeries, type PortSeries } from './portSeries.js';
import { type GivenValue, portValue } from './portValues.js';

/** What the default export of a model module is called with, once before the run. */
export interface ModelRun {
  /** The input ports without the clocks. */
  readonly inputs: readonly PortLayout[];
  readonly outputs: readonly PortLayout[];
  /** Whether values may be x. */
  readonly threeValued: boolean;
}

/** Consecutive cycles for which a model says what it expects. */
export interface ModelBlock {
  /** Number, from 0, of the first cycle. */
  readonly firstCycle: number;
  readonly cycles: number;
  /** The values of each input port in these cycles; the arrays are used again. */
  readonly inputs: Readonly<Record<string, PortSeries>>;
}

/**
 * What is expected of some output ports or parts of them, a value for each cycle of the block: a
 * number, a bigint or a text as in a table (`0b1-0`); undefined and null match anything.
 */
export type ModelOutputs = Readonly<Record<string, ArrayLike<GivenValue | null | undefined>>>;

/**
 * The default export of a model module: it returns the function that is called for block after
 * block, in order and without gaps, and keeps its own state between them.
 */
export type ModelProgram = (
  run: ModelRun,
) => (block: ModelBlock) => ModelOutputs | Promise<ModelOutputs>;

/** Compares a response with what a JavaScript module computes; see `ModelProgram`. */
export class ModelExpectation implements ResponseChecker {
  readonly #module: UserModule;
  readonly #layout: ModelLayout;
  readonly #step: (block: ModelBlock) => unknown;
  readonly #inputs: InputSeries;
  readonly #columns = new Map<string, PortColumn>();
  readonly #value: ExpectedValue;
  readonly #stride: number;

  /** Loads the module. Throws `FileError`, and what the file system throws. */
  static async open(path: string, layout: ModelLayout): Promise<ModelExpectation> {
    const module = await UserModule.load(path);
    const { inputs, outputs, threeValued } = layout;
    const run: ModelRun = { inputs: inputs.ports, outputs: outputs.ports, threeValued };
    const main = module.main();
    let step: unknown;
    try {
      step = await main(run);
    } catch (error) {
      throw module.error(error, 'before the run');
    }
    if (typeof step === 'function') return new ModelExpectation(module, layout, step as never);
    throw module.refusal('the default export must return a function that takes blocks of cycles');
  }

  private constructor(
    module: UserModule,
    layout: ModelLayout,
    step: (block: ModelBlock) => unknown,
  ) {
    this.#module = module;
    this.#layout = layout;
    this.#step = step;
    this.#inputs = new InputSeries(layout);
    this.#value = new ExpectedValue(layout);
    this.#stride = rowStride(layout.outputs, layout.threeValued);
  }

  async check(block: RunBlock, most: number): Promise<Departure[]> {
    const expected = await this.#ask(block);
    const departures: Departure[] = [];
    let end = block.cycles;
    for (const [name, values] of Object.entries(expected)) {
      const column = this.#column(name);
      this.#checkLength(column, values, block);
      for (let i = 0; i < end; i++) {
        const value = values[i];
        if (value === undefined || value === null || this.#isMet(column, value, block, i)) continue;
        departures.push(this.#departure(column, value, block, i));
        // Of one alone the earliest is wanted, which may be of a port that comes later.
        if (most === 1) end = i;
      }
    }
    departures.sort((p, q) => p.cycle - q.cycle);
    return departures.slice(0, most);
  }

  finish(): undefined {
    // A model expects nothing beyond the run.
  }

  close(): void {
    // Nothing is open.
  }

  async #ask(block: RunBlock): Promise<ModelOutputs> {
    this.#inputs.goTo(block);
    const { firstCycle, cycles } = block;
    let outputs: unknown;
    try {
      outputs = await this.#step({ firstCycle, cycles, inputs: this.#inputs.byName });
    } catch (error) {
      throw this.#module.error(error, `at cycle ${firstCycle} and after`);
    }
    if (typeof outputs === 'object' && outputs !== null) return outputs as ModelOutputs;
    throw this.#refusal(firstCycle, `expected an object with arrays, got ${String(outputs)}`);
  }

  #column(name: string): PortColumn {
    const known = this.#columns.get(name);
    if (known) return known;
    const column = columnOf(name, 0, this.#layout.outputs);
    if (typeof column === 'string') throw this.#module.refusal(column);
    this.#columns.set(name, column);
    return column;
  }

  #checkLength({ name }: PortColumn, values: unknown, { firstCycle, cycles }: RunBlock): void {
    const { length } = (values ?? {}) as Partial<ArrayLike<unknown>>;
    if (typeof values === 'object' && length !== undefined && length >= cycles) return;
    const got = length === undefined ? `got ${String(values)}` : `got ${length} values`;
    throw this.#refusal(firstCycle, `${name} needs a value for each of ${cycles} cycles, ${got}`);
  }

  #isMet(column: PortColumn, value: GivenValue, { rows }: RunBlock, row: number): boolean {
    const { offset, width } = column;
    const at = row * this.#stride;
    const { threeValued, outputs } = this.#layout;
    if (typeof value === 'number' && width <= 32 && !threeValued) {
      if (readBits(rows, at, offset, width) === value) return true;
    } else {
      const unknownAt = threeValued ? at + outputs.words : undefined;
      const actual = portValue(column, rows, at, unknownAt);
      if (actual === value) return true;
    }
    return this.#value.matches(column, rows, at, value);
  }

  #departure(
    column: PortColumn,
    value: GivenValue,
    { firstCycle, rows }: RunBlock,
    row: number,
  ): Departure {
    const cycle = firstCycle + row;
    const expected = this.#value.text(column, value);
    if (expected instanceof Error) throw this.#refusal(cycle, expected.message);
    const at = row * this.#stride;
    const unknownAt = this.#layout.threeValued ? at + this.#layout.outputs.words : undefined;
    const actual = formatValue(column, rows, at, unknownAt);
    return { cycle, port: column.name, expected, actual, place: this.#module.path };
  }

  #refusal(cycle: number, reason: string): Error {
    return this.#module.refusal(`cycle ${cycle}: ${reason}`);
  }
}
