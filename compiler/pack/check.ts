import { join } from 'node:path';
import { setImmediate } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { wordBytes } from '../../runtime/memoryState.js';
import { toBase64 } from '../../runtime/model/base64.js';
import { columnWords, type PlacedColumn, readRows } from '../../runtime/model/columns.js';
import type * as packaged from '../../runtime/model/index.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';
import { formatValue } from '../../runtime/valueText.js';
import { powerUpState } from '../circuit/powerUp.js';
import type { Design } from '../compile.js';
import { ReferenceEngine } from '../interpret/reference/referenceEngine.js';
import type { KeptNets } from './keptNets.js';
import { withOutputs } from './probes.js';
import type { ResetPort } from './resets.js';
import { givenValue, memoryWord, textOf } from './values.js';

/** What was compared before a package was written. */
export interface PackageCheck {
  /** The engine that the package agrees with. */
  readonly engine: 'reference';
  /** Cycles of random inputs that were compared in any case, on whatever machine. */
  readonly cycles: number;
  /** Of the inputs, as of `run --random`; inputs that reset act in two cycles, then in one of 256. */
  readonly seed: number;
  /** In how many of the cycles all outputs and kept nets were read one by one. */
  readonly read: number;
  readonly nets: number;
}

/** What a package is compared with, and how long. */
export interface CheckRequest {
  readonly design: Design;
  readonly kept: KeptNets;
  readonly resets: readonly ResetPort[];
  /** Told how many cycles have been compared, of how many. */
  readonly onProgress?: (cycles: number, of: number) => void;
}

/** Thrown where a package departs from the reference. */
export class PackageDeparture extends Error {}

const SEED = 1;
const WANTED_CYCLES = 10_000;
const ENOUGH_MS = 5000;
/** Nets times cycles that the reference does in about the time that is enough. */
const AFFORDED = 2e8;
const PAUSE_MS = 50;
const READ_CYCLES = 48;
const MOST_FAULTS = 200;
const BLOCK_CYCLES = 64;

/**
 * Runs the package in a folder, by its own `model.mjs`, beside the reference interpreter: the first
 * cycles step by step with every output and kept net read, the others as blocks, at last from a
 * saved state. At least 10,000 cycles or five seconds. Throws `PackageDeparture`.
 *
 * The cycles it tells of depend on the netlist alone; on a fast machine a large one gets more.
 */
export async function checkPackage(folder: string, request: CheckRequest): Promise<PackageCheck> {
  const { load } = (await import(pathToFileURL(join(folder, 'model.mjs')).href)) as typeof packaged;
  const model = await load(undefined, { verify: true });
  const beside = new Comparison(request, model);
  const planned = plannedCycles(request.design);
  const read = Math.min(READ_CYCLES, planned);
  beside.readEach(read);
  const started = performance.now();
  let nextPause = started + PAUSE_MS;
  while (beside.cycles < WANTED_CYCLES && beside.faults < MOST_FAULTS) {
    const isEnough = performance.now() - started > ENOUGH_MS;
    if (isEnough && beside.cycles >= planned) break;
    beside.runBlock(Math.min(BLOCK_CYCLES, WANTED_CYCLES - beside.cycles));
    request.onProgress?.(beside.cycles, WANTED_CYCLES);
    // Without a pause no signal is handled.
    if (performance.now() > nextPause) {
      await setImmediate();
      nextPause = performance.now() + PAUSE_MS;
    }
  }
  const other = await load();
  beside.goOn(other.restore(JSON.stringify(model.save())));
  other.dispose();
  model.dispose();
  const cycles = Math.min(planned, beside.cycles);
  return { engine: 'reference', cycles, seed: SEED, read, nets: request.kept.nets.length };
}

/** Cycles that are compared in any case: fewer where the netlist is large. */
const plannedCycles = ({ circuit }: Design): number =>
  Math.max(16, Math.min(WANTED_CYCLES, Math.floor(AFFORDED / Math.max(1, circuit.netCount))));

class Comparison {
  cycles = 0;
  /** How often both have come to a cycle without result, and started again. */
  faults = 0;
  #model: packaged.Model;
  readonly #resets: readonly ResetPort[];
  readonly #own: Design;
  /** With the kept nets as further outputs. */
  readonly #watched: Design;
  readonly #reference: ReferenceEngine;
  readonly #random = new RandomBits(SEED);

  constructor({ design, kept, resets }: CheckRequest, model: packaged.Model) {
    this.#model = model;
    this.#resets = resets;
    this.#own = design;
    this.#watched = withOutputs(design, [...design.circuit.outputs, ...kept.ports]);
    this.#reference = new ReferenceEngine(this.#watched.circuit, this.#watched);
    this.#powerUp();
  }

  /** Writes inputs, looks at everything, lets one cycle pass, and so on. */
  readEach(cycles: number): void {
    const { inputs } = this.#own.layout;
    for (let i = 0; i < cycles; i++) {
      const stimulus = this.#stimulus(1);
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
    const stimulus = this.#stimulus(cycles);
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

  /** Some more cycles on another instance, which has the state of the one before. */
  goOn(other: packaged.Model): void {
    this.#model = other;
    this.runBlock(BLOCK_CYCLES);
    this.readEach(1);
  }

  #stimulus(cycles: number): Uint32Array {
    const { inputs, threeValued } = this.#own.layout;
    const stride = rowStride(inputs, threeValued);
    const rows = new Uint32Array(cycles * stride);
    fillRandomRows(this.#random, inputs, rows, cycles, stride);
    for (const { name, active } of this.#resets) {
      const port = inputs.ports.find((each) => each.name === name);
      if (port === undefined) continue;
      for (let i = 0; i < cycles; i++) {
        if (this.cycles + i < 2 || (this.cycles + i) % 256 === 0) continue;
        const word = i * stride + (port.offset >>> 5);
        const bit = 1 << (port.offset & 31);
        rows[word] = active === 1 ? rows[word]! & ~bit : rows[word]! | bit;
      }
    }
    if (threeValued) this.#addUnknown(rows, cycles);
    return rows;
  }

  // One cycle in eight has x in some of its inputs.
  #addUnknown(rows: Uint32Array, cycles: number): void {
    const { words, bits } = this.#own.layout.inputs;
    for (let i = 0; i < cycles; i++) {
      if ((this.cycles + i) % 8 !== 7) continue;
      for (let word = 0; word < words; word++) {
        const inRow = word === words - 1 && bits % 32 !== 0 ? (1 << (bits % 32)) - 1 : -1;
        const unknown = this.#random.next() & this.#random.next() & inRow;
        rows[i * 2 * words + word]! &= ~unknown;
        rows[i * 2 * words + words + word] = unknown;
      }
    }
  }

  #expect(cycles: number, stimulus: Uint32Array) {
    const { inputs, outputs, threeValued } = this.#watched.layout;
    const rows = new Uint32Array(cycles * rowStride(outputs, threeValued));
    try {
      this.#reference.run(cycles, stimulus, rowStride(inputs, threeValued), rows);
      return { failed: false, completed: cycles, rows };
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      return { failed: true, completed: error.completed, rows };
    }
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

const emptyColumns = (
  ports: readonly PlacedColumn['port'][],
  cycles: number,
  group: number,
): PlacedColumn[] =>
  ports.map((port) => ({ port, column: new Uint32Array(cycles * columnWords(port)), group }));

const byName = (columns: readonly PlacedColumn[]) =>
  Object.fromEntries(columns.map(({ port, column }) => [port.name, column]));
