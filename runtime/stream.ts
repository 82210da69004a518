import { type Engine, RunFault } from './engine.js';
import { type ModelLayout, rowStride } from './layout.js';
import { fillRandomRows, RandomBits } from './random.js';

/** Packed stimulus rows for some cycles. */
export interface StimulusBlock {
  readonly cycles: number;
  /** The maker may use the array again when the next block is asked for. */
  readonly rows: Uint32Array;
  /** Words from row to row; 0 holds the one row for all cycles. */
  readonly stride: number;
}

/** Packed response rows of consecutive cycles. */
export interface ResponseBlock {
  /** Number, from 0, of the cycle of the first row. */
  readonly firstCycle: number;
  readonly cycles: number;
  /**
   * `cycles` rows without gaps; empty if responses were not asked for. The array is used again for
   * the next block: copy what is to be kept.
   */
  readonly rows: Uint32Array;
}

/** A response together with the stimulus that it answers. */
export interface RunBlock extends ResponseBlock {
  /** Packed rows of the inputs, used again like `rows`. */
  readonly stimulus: Uint32Array;
  /** Words from one of them to the next; 0 where one row is held for all cycles. */
  readonly stimulusStride: number;
}

/** How `runBlocks` runs. */
export interface RunOptions {
  /**
   * Number of cycles; the length of the stimulus unless given. A longer stimulus is cut, the last
   * row of a shorter one is held (0 if there is none).
   */
  readonly cycles?: number;
  /** Whether anyone looks at the response; default true. */
  readonly response?: boolean;
  /** Asked before each call of the engine: how many cycles it should have at most, at least 1. */
  readonly pieceCycles?: () => number;
  /**
   * Goes on in the middle of a run: the number of cycles done, and the stimulus row of the last of
   * them (undefined for none). The stimulus is what is left of it; `cycles` counts from the start.
   */
  readonly from?: { readonly cycle: number; readonly before: Uint32Array | undefined };
}

// Long enough that a call costs nothing beside its cycles, short enough for the cache and for
// engines that are only optimized between calls.
const MOST_CYCLES = 4096;
const MOST_WORDS = 16384;

/** Cycles of a block of rows of some words: at most 4,096 and 64 KiB, but at least one. */
export const blockCycles = (words: number): number =>
  Math.max(1, Math.min(MOST_CYCLES, Math.floor(MOST_WORDS / Math.max(1, words))));

/**
 * Runs an engine over a stimulus, block by block in constant memory.
 *
 * Throws what the stimulus throws, and `RunFault` with the number of cycles completed by the whole
 * run, after the rows of those cycles have been handed out.
 */
export async function* runBlocks(
  engine: Engine,
  stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  options: RunOptions = {},
): AsyncGenerator<RunBlock, void, undefined> {
  const run = new BlockRun(engine, options);
  for await (const block of stimulus) {
    yield* run.advance(block);
    if (run.isDone) return;
  }
  yield* run.holdLast();
}

/** `runBlocks` without waiting, for a stimulus that is made on the spot. */
export function* runBlocksSync(
  engine: Engine,
  stimulus: Iterable<StimulusBlock>,
  options: RunOptions = {},
): Generator<RunBlock, void, undefined> {
  const run = new BlockRun(engine, options);
  for (const block of stimulus) {
    yield* run.advance(block);
    if (run.isDone) return;
  }
  yield* run.holdLast();
}

/** A stimulus that holds every input at 0. */
export function heldStimulus(layout: ModelLayout, cycles: number): Iterable<StimulusBlock> {
  const rows = new Uint32Array(rowStride(layout.inputs, layout.threeValued));
  return [{ cycles, rows, stride: 0 }];
}

/**
 * A stimulus that gives every input a fresh uniform bit in each cycle, from `RandomBits(seed)` by
 * `fillRandomRows`. `cycles` may be Infinity.
 */
export function* randomStimulus(
  layout: ModelLayout,
  seed: number | bigint,
  cycles: number,
): Generator<StimulusBlock, void, undefined> {
  const random = new RandomBits(seed);
  const stride = rowStride(layout.inputs, layout.threeValued);
  const most = blockCycles(stride);
  const rows = new Uint32Array(most * stride);
  for (let left = cycles; left > 0; left -= most) {
    const count = Math.min(left, most);
    fillRandomRows(random, layout.inputs, rows, count, stride);
    yield { cycles: count, rows, stride };
  }
}

/** One run in progress: where it stands, and the buffers that it uses again and again. */
class BlockRun {
  readonly #engine: Engine;
  readonly #wanted: number | undefined;
  readonly #response: Uint32Array | undefined;
  readonly #responseStride: number;
  readonly #most: number;
  readonly #pieceCycles: () => number;
  readonly #lastRow: Uint32Array;
  #cycle = 0;

  constructor(engine: Engine, { cycles, response = true, pieceCycles, from }: RunOptions) {
    if (cycles !== undefined && !(Number.isSafeInteger(cycles) && cycles >= 0)) {
      throw new RangeError(`cycles is a count, got ${cycles}`);
    }
    const { inputs, outputs, threeValued } = engine.layout;
    this.#engine = engine;
    this.#wanted = cycles;
    this.#responseStride = rowStride(outputs, threeValued);
    this.#most = blockCycles(response ? this.#responseStride : 1);
    this.#pieceCycles = pieceCycles ?? (() => this.#most);
    if (response) this.#response = new Uint32Array(this.#most * this.#responseStride);
    this.#lastRow = new Uint32Array(rowStride(inputs, threeValued));
    if (from === undefined) return;
    this.#cycle = from.cycle;
    if (from.before !== undefined) this.#lastRow.set(from.before);
  }

  get isDone(): boolean {
    return this.#cycle === this.#wanted;
  }

  /** Runs one block, cut to what is still wanted. */
  *advance({ cycles, rows, stride }: StimulusBlock): Generator<RunBlock, void, undefined> {
    const left = this.#wanted === undefined ? cycles : this.#wanted - this.#cycle;
    const count = Math.min(cycles, left);
    // Kept now: the maker may reuse the array once all rows have been handed out.
    if (count > 0) {
      const last = (count - 1) * stride;
      this.#lastRow.set(rows.subarray(last, last + this.#lastRow.length));
    }
    for (let done = 0; done < count; ) {
      const step = Math.min(this.#most, this.#pieceCycles(), count - done);
      yield* this.#step(step, stride === 0 ? rows : rows.subarray(done * stride), stride);
      done += step;
    }
  }

  /** Runs what is still wanted with the inputs as they were last. */
  *holdLast(): Generator<RunBlock, void, undefined> {
    if (this.#wanted === undefined || this.isDone) return;
    const cycles = this.#wanted - this.#cycle;
    yield* this.advance({ cycles, rows: this.#lastRow, stride: 0 });
  }

  *#step(cycles: number, rows: Uint32Array, stride: number): Generator<RunBlock, void, undefined> {
    try {
      this.#engine.run(cycles, rows, stride, this.#response);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      if (error.completed > 0) yield this.#block(error.completed, rows, stride);
      throw new RunFault(this.#cycle, error);
    }
    yield this.#block(cycles, rows, stride);
  }

  #block(cycles: number, stimulus: Uint32Array, stimulusStride: number): RunBlock {
    const firstCycle = this.#cycle;
    this.#cycle += cycles;
    const rows = this.#response?.subarray(0, cycles * this.#responseStride) ?? new Uint32Array(0);
    return { firstCycle, cycles, rows, stimulus, stimulusStride };
  }
}
