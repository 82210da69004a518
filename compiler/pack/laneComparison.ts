import { rowStride } from '../../runtime/layout.js';
import { columnWords, readRows } from '../../runtime/model/columns.js';
import type * as packaged from '../../runtime/model/lanes/index.js';
import { formatValue } from '../../runtime/valueText.js';
import { powerUpState } from '../circuit/powerUp.js';
import type { Design } from '../compile.js';
import { ReferenceEngine } from '../interpret/reference/referenceEngine.js';
import { byName, CheckInputs, type Expected, emptyColumns, expectedOf } from './checkInputs.js';
import {
  BLOCK_CYCLES,
  type CheckRequest,
  type Comparison,
  PackageDeparture,
  SEED,
} from './comparison.js';
import { withOutputs } from './probes.js';
import { givenValue, textOf } from './values.js';

type Load = typeof packaged.load;

/** The comparison of a package that runs many sequences, some of them beside references. */
export class LaneComparison implements Comparison {
  cycles = 0;
  faults = 0;
  #sinceStart = 0;
  /** At the ends of words, and in the midst. */
  readonly lanes: readonly number[];
  readonly #load: Load;
  #model: packaged.Model;
  readonly #own: Design;
  /** With the kept nets as further outputs. */
  readonly #watched: Design;
  readonly #references: readonly ReferenceEngine[];
  readonly #inputs: readonly CheckInputs[];

  private constructor({ design, kept, resets }: CheckRequest, load: Load, model: packaged.Model) {
    this.#load = load;
    this.#model = model;
    this.#own = design;
    this.#inputs = Array.from(
      { length: model.lanes },
      (_, lane) => new CheckInputs(design, resets, SEED + lane),
    );
    this.lanes = [0, 1, model.lanes / 2, model.lanes - 1];
    this.#watched = withOutputs(design, [...design.circuit.outputs, ...kept.ports]);
    const { circuit } = this.#watched;
    this.#references = this.lanes.map(() => new ReferenceEngine(circuit, this.#watched));
    this.#powerUp();
  }

  /** Loads the package; its module must have the hash that it was written with. */
  static async of(module: unknown, request: CheckRequest): Promise<LaneComparison> {
    const { load } = module as typeof packaged;
    return new LaneComparison(request, load, await load(undefined, { verify: true }));
  }

  readEach(cycles: number): void {
    const { layout } = this.#own;
    for (let i = 0; i < cycles; i++) {
      const stimuli = this.#inputs.map((inputs) => inputs.rows(1, this.cycles));
      for (const [lane, stimulus] of stimuli.entries()) {
        const values = layout.inputs.ports.map(
          (port) => [port.name, givenValue(layout, port, stimulus)] as const,
        );
        this.#model.write(Object.fromEntries(values), lane);
      }
      const expected = this.#expect(1, stimuli);
      for (const [at, lane] of this.lanes.entries()) {
        if (!expected[at]!.failed) this.#lookAtAll(lane, expected[at]!.rows);
      }
      this.#model.step();
      this.#finish(1, expected);
    }
  }

  runBlock(cycles: number): void {
    const { inputs, outputs, threeValued } = this.#own.layout;
    const stimuli = this.#inputs.map((each) => each.rows(cycles, this.cycles));
    const given = (group: number) => {
      const lanes = stimuli.map((rows) => {
        const columns = emptyColumns(inputs.ports, cycles, group);
        readRows(rows, rowStride(inputs, threeValued), columns, 0, cycles);
        return byName(columns);
      });
      return Object.fromEntries(
        inputs.ports.map(({ name }) => [name, lanes.map((columns) => columns[name]!)]),
      );
    };
    const unknownInputs = threeValued ? { unknown: given(inputs.words) } : {};
    const expected = this.#expect(cycles, stimuli);
    const result = this.#model.run({ cycles, stimulus: given(0), ...unknownInputs });
    const watched = this.#watched.layout.outputs;
    for (const [at, lane] of this.lanes.entries()) {
      const { completed, rows } = expected[at]!;
      for (const [group, actual] of [
        [0, result.response],
        [watched.words, result.unknown],
      ] as const) {
        if (actual === undefined) continue;
        const wanted = emptyColumns(outputs.ports, cycles, group);
        readRows(rows, rowStride(watched, threeValued), wanted, 0, completed);
        for (const { port, column } of wanted) {
          const words = columnWords(port);
          const found = column.findIndex((word, i) => word !== actual[port.name]![lane]![i]);
          if (found >= 0) this.#depart(lane, port.name, this.cycles + Math.floor(found / words));
        }
      }
    }
    this.#finish(cycles, expected);
  }

  async goOn(): Promise<void> {
    const saved = this.#model.save().map((state) => JSON.stringify(state));
    this.#model = await this.#load();
    // First in a wrong order, so that each lane is moved alone, too.
    this.#model.restore([...saved].reverse());
    for (const [lane, state] of saved.entries()) this.#model.restore(state, lane);
    this.runBlock(BLOCK_CYCLES);
    this.readEach(1);
  }

  #expect(cycles: number, stimuli: readonly Uint32Array[]): Expected[] {
    return this.lanes.map((lane, i) => expectedOf(this.#references[i]!, cycles, stimuli[lane]!));
  }

  // Lanes must end in the cycles in which their references do; all then start again.
  #finish(cycles: number, expected: readonly Expected[]): void {
    const { faults } = this.#model;
    for (const [i, lane] of this.lanes.entries()) {
      const { failed, completed } = expected[i]!;
      const end = faults.find((fault) => fault.lane === lane)?.cycle;
      const wanted = failed ? this.#sinceStart + completed : undefined;
      if (end === wanted) continue;
      const [is, should] = [end, wanted].map((cycle) => cycle ?? 'none');
      throw new PackageDeparture(
        `lane ${lane} of the package ends at cycle ${is} since power-up, expected ${should}`,
      );
    }
    this.#sinceStart += cycles;
    this.cycles += cycles;
    if (faults.length === 0) return;
    this.faults++;
    this.#sinceStart = 0;
    this.#model.reset();
    this.#powerUp();
  }

  #powerUp(): void {
    const { circuit, layout } = this.#own;
    const state = powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero');
    for (const reference of this.#references) reference.reset(state);
  }

  #lookAtAll(lane: number, row: Uint32Array): void {
    const { outputs, threeValued } = this.#watched.layout;
    for (const port of outputs.ports) {
      const expected = formatValue(port, row, 0, threeValued ? outputs.words : undefined);
      const actual = textOf(this.#model.peek(port.name, lane), port.width);
      if (actual !== expected) this.#depart(lane, port.name, this.cycles, expected, actual);
    }
  }

  #depart(lane: number, name: string, cycle: number, expected?: string, actual?: string): never {
    const values = expected === undefined ? '' : `: it is ${actual}, expected ${expected}`;
    throw new PackageDeparture(
      `lane ${lane} of the package departs from the reference at cycle ${cycle}, ${name}${values}`,
    );
  }
}
