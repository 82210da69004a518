import type { RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { wordBytes } from '../../runtime/memoryState.js';
import { toBase64 } from '../../runtime/model/base64.js';
import { columnWords, readRows } from '../../runtime/model/columns.js';
import type * as packaged from '../../runtime/model/index.js';
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
import { givenValue, memoryWord, textOf } from './values.js';

type Load = typeof packaged.load;

/** The comparison of a package that runs one sequence. */
export class SingleComparison implements Comparison {
  cycles = 0;
  faults = 0;
  readonly #load: Load;
  #model: packaged.Model;
  readonly #own: Design;
  /** With the kept nets as further outputs. */
  readonly #watched: Design;
  readonly #reference: ReferenceEngine;
  readonly #inputs: CheckInputs;

  private constructor({ design, kept, resets }: CheckRequest, load: Load, model: packaged.Model) {
    this.#load = load;
    this.#model = model;
    this.#inputs = new CheckInputs(design, resets, SEED);
    this.#own = design;
    this.#watched = withOutputs(design, [...design.circuit.outputs, ...kept.ports]);
    this.#reference = new ReferenceEngine(this.#watched.circuit, this.#watched);
    this.#powerUp();
  }

  /** Loads the package; its module must have the hash that it was written with. */
  static async of(module: unknown, request: CheckRequest): Promise<SingleComparison> {
    const { load } = module as typeof packaged;
    return new SingleComparison(request, load, await load(undefined, { verify: true }));
  }

  /** Writes inputs, looks at everything, lets one cycle pass, and so on. */
  readEach(cycles: number): void {
    const { inputs } = this.#own.layout;
    for (let i = 0; i < cycles; i++) {
      const stimulus = this.#inputs.rows(1, this.cycles);
      for (const port of inputs.ports) {
        this.#model.write({ [port.name]: givenValue(this.#own.layout, port, stimulus) });
      }
      const expected = this.#expect(1, stimulus);
      if (expected.failed) {
        this.#expectFault(() => this.#model.step());
        continue;
      }
      this.#lookAtAll(expected.rows);
      this.#model.step();
      this.cycles++;
    }
    this.#lookAtMemories();
  }

  /** Runs a block of cycles on typed arrays. */
  runBlock(cycles: number): void {
    const { inputs, outputs, threeValued } = this.#own.layout;
    const stimulus = this.#inputs.rows(cycles, this.cycles);
    const given = (group: number) => {
      const columns = emptyColumns(inputs.ports, cycles, group);
      readRows(stimulus, rowStride(inputs, threeValued), columns, 0, cycles);
      return byName(columns);
    };
    const unknownInputs = threeValued ? { unknown: given(inputs.words) } : {};
    const request = { cycles, stimulus: given(0), ...unknownInputs };
    const expected = this.#expect(cycles, stimulus);
    if (expected.failed) {
      this.#expectFault(() => this.#model.run(request), expected.completed);
      return;
    }
    const { response, unknown } = this.#model.run(request);
    const watched = this.#watched.layout.outputs;
    for (const [group, actual] of [
      [0, response],
      [watched.words, unknown],
    ] as const) {
      if (actual === undefined) continue;
      const wanted = emptyColumns(outputs.ports, cycles, group);
      readRows(expected.rows, rowStride(watched, threeValued), wanted, 0, cycles);
      for (const { port, column } of wanted) {
        const words = columnWords(port);
        const at = column.findIndex((word, i) => word !== actual[port.name]![i]);
        if (at >= 0) this.#depart(port.name, this.cycles + Math.floor(at / words));
      }
    }
    this.cycles += cycles;
  }

  /** Some more cycles on another instance, from the saved state of the one before. */
  async goOn(): Promise<void> {
    const other = await this.#load();
    this.#model = other.restore(JSON.stringify(this.#model.save()));
    this.runBlock(BLOCK_CYCLES);
    this.readEach(1);
  }

  #expect(cycles: number, stimulus: Uint32Array): Expected {
    return expectedOf(this.#reference, cycles, stimulus);
  }

  // Fault for fault: the package must stop in the same cycle, by an error class of its own. Both
  // then start again.
  #expectFault(run: () => void, completed = 0): void {
    this.faults++;
    this.cycles += completed;
    if (faultOf(run) !== completed) {
      throw new PackageDeparture(`cycle ${this.cycles} has no result, but the package goes on`);
    }
    this.#model.reset();
    this.#powerUp();
  }

  #powerUp(): void {
    const { circuit, layout } = this.#own;
    this.#reference.reset(powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero'));
  }

  #lookAtAll(row: Uint32Array): void {
    const { outputs, threeValued } = this.#watched.layout;
    for (const port of outputs.ports) {
      const expected = formatValue(port, row, 0, threeValued ? outputs.words : undefined);
      const actual = textOf(this.#model.peek(port.name), port.width);
      if (actual !== expected) this.#depart(port.name, this.cycles, expected, actual);
    }
  }

  #lookAtMemories(): void {
    const { layout } = this.#own;
    if (layout.memories.length === 0) return;
    const bytes = this.#reference.memoryState();
    if (this.#model.save().memories !== toBase64(bytes)) this.#depart('memories', this.cycles);
    for (const [i, { name, width, indices, from }] of this.#model.memories.entries()) {
      const memory = layout.memories[i]!;
      const last = from + (memory.depth - 1) * wordBytes(memory, layout.threeValued);
      const word = indices.map(({ low, size }) => low + size - 1);
      const text = `${name}${word.map((index) => `[${index}]`).join('')}`;
      const expected = memoryWord(bytes, last, width, layout.threeValued);
      const actual = textOf(this.#model.peek(text), width);
      if (actual !== expected) this.#depart(text, this.cycles, expected, actual);
    }
  }

  #depart(name: string, cycle: number, expected?: string, actual?: string): never {
    const values = expected === undefined ? '' : `: it is ${actual}, expected ${expected}`;
    throw new PackageDeparture(
      `the package departs from the reference at cycle ${cycle}, ${name}${values}`,
    );
  }
}

/** In which of the cycles that it runs something has no result. */
function faultOf(run: () => void): number | undefined {
  try {
    run();
    return undefined;
  } catch (error) {
    const { name, completed } = error as RunFault;
    if (name === 'RunFault') return completed;
    throw error;
  }
}
