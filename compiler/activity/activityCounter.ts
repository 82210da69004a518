import type { LaneModel } from '../../runtime/laneModel.js';
import type { LaneExports } from '../../runtime/lanePlaces.js';
import type { RowLayout } from '../../runtime/layout.js';
import { designOf } from '../compile.js';
import { laneProgramsOf } from '../compileLanes.js';
import { type Emitter, localEmitter } from '../emit/emitter.js';
import { CountedWord, countedNumbers } from '../program/countedWord.js';
import type { WatchedPlace } from '../run/outlets/outlet.js';
import type { ObservedNets } from './observedNets.js';

/** Cycles that are counted at a time. */
export const BATCH = 128;

/** What a module exports that counts. */
interface CountExports extends Pick<LaneExports, 'memory' | 'run'> {
  turn(from: number, rowBytes: number, to: number, numbers: number): void;
  count(
    row: number,
    unknown: number,
    counts: number,
    words: number,
    mask: bigint,
    maskHigh: bigint,
  ): void;
}

const roundUp = (value: number): number => Math.ceil(value / 64) * 64;

/**
 * Counts what the values of `ObservedNets` do, exactly, in a module of its own.
 *
 * The values of 128 cycles are computed at once, a lane for each cycle, from those of the sources in
 * these cycles; a word is then the course of a value, of which ones and changes are counted.
 */
export class ActivityCounter {
  /** Cycles counted. */
  cycles = 0;
  readonly #exports: CountExports;
  readonly #threeValued: boolean;
  readonly #place: WatchedPlace;
  /** Bits of the sources, and the words of their lane row. */
  readonly #sources: RowLayout;
  readonly #values: number;
  /** Cycles taken and not counted yet. */
  #pending = 0;
  /** Addresses of the values' words, their counts, the sources' words and rows. */
  readonly #response: number;
  readonly #counts: number;
  readonly #stimulus: number;
  readonly #rows: number;
  /** The module's memory, which does not grow any more. */
  readonly #memory: Uint32Array;

  private constructor({ layout, memory }: LaneModel, exports: CountExports, place: WatchedPlace) {
    const { inputs, outputs, threeValued } = layout;
    const groups = threeValued ? 2 : 1;
    this.#exports = exports;
    this.#threeValued = threeValued;
    this.#place = place;
    this.#sources = inputs;
    this.#values = outputs.bits;
    this.#response = roundUp(memory.free);
    this.#counts = roundUp(this.#response + 16 * groups * outputs.bits);
    this.#stimulus = roundUp(this.#counts + 8 * this.#numbers * outputs.bits);
    // Each group is written up to a multiple of 32 bits.
    this.#rows = roundUp(this.#stimulus + 16 * groups * 32 * inputs.words);
    const end = this.#rows + 4 * BATCH * place.stride;
    const missing = end - exports.memory.buffer.byteLength;
    if (missing > 0) exports.memory.grow(Math.ceil(missing / 65536));
    this.#memory = new Uint32Array(exports.memory.buffer);
  }

  /** Compiles the logic of observed nets, the sources of which stand at a place of watched rows. */
  static async create(
    { logic }: ObservedNets,
    place: WatchedPlace,
    emitter: Emitter = localEmitter(),
  ): Promise<ActivityCounter> {
    const design = designOf(logic, { threeValued: place.toUnknown !== undefined });
    const programs = { ...laneProgramsOf(design, BATCH), counts: true };
    const model = await emitter.emitLanes(programs, design.layout, BATCH);
    const { instance } = await WebAssembly.instantiate(model.bytes);
    return new ActivityCounter(model, instance.exports as unknown as CountExports, place);
  }

  /** Takes the sources of some cycles, from row `first` of watched rows on. */
  add(rows: Uint32Array, first: number, cycles: number): void {
    const { stride } = this.#place;
    for (let done = 0; done < cycles; ) {
      const step = Math.min(cycles - done, BATCH - this.#pending);
      const from = (first + done) * stride;
      const taken = rows.subarray(from, from + step * stride);
      this.#memory.set(taken, this.#rows / 4 + this.#pending * stride);
      this.#pending += step;
      done += step;
      if (this.#pending === BATCH) this.flush();
    }
  }

  /** Counts what has been taken so far; other methods tell of that. */
  flush(): void {
    if (this.#pending === 0) return;
    this.#turnRows();
    // Without state no area is read or written.
    this.#exports.run(1, this.#stimulus, 0, this.#response, 0, 0, 0, 0);
    const unknown = this.#response + 16 * this.#values;
    if (this.cycles === 0) this.#startWith(this.#response, unknown);
    const [low, high] = [Math.min(64, this.#pending), Math.max(0, this.#pending - 64)];
    const [mask, maskHigh] = [maskOf(low), maskOf(high)];
    this.#exports.count(this.#response, unknown, this.#counts, this.#values, mask, maskHigh);
    this.cycles += this.#pending;
    this.#pending = 0;
  }

  /** Changes of a value between 0 and 1. */
  changes(value: number): number {
    return this.#number(value, CountedWord.Changes);
  }

  /** Cycles in which a value is 1. */
  ones(value: number): number {
    return this.#number(value, CountedWord.Ones);
  }

  /** Cycles in which a value is x. */
  unknown(value: number): number {
    return this.#threeValued ? this.#number(value, CountedWord.Unknown) : 0;
  }

  /** All that has been counted, to go on from with `restore`. */
  save(): Uint8Array {
    this.flush();
    return this.#bytes.slice();
  }

  /** Goes on after so many cycles. */
  restore(cycles: number, counts: Uint8Array): void {
    this.cycles = cycles;
    this.#bytes.set(counts);
  }

  // What is left of a batch repeats its last cycle.
  #turnRows(): void {
    const { firstWord, stride, toUnknown } = this.#place;
    const { bits, words } = this.#sources;
    const first = this.#rows / 4;
    const last = first + (this.#pending - 1) * stride;
    for (let row = this.#pending; row < BATCH; row++) {
      this.#memory.copyWithin(first + row * stride, last, last + stride);
    }
    const from = this.#rows + 4 * firstWord;
    this.#exports.turn(from, 4 * stride, this.#stimulus, words);
    if (toUnknown === undefined) return;
    this.#exports.turn(from + 4 * toUnknown, 4 * stride, this.#stimulus + 16 * bits, words);
  }

  // The first cycle is no change: it is compared with itself.
  #startWith(response: number, unknown: number): void {
    const seed = (from: number, slot: number) => {
      for (let word = 0; word < this.#values; word++) {
        const at = this.#counts / 4 + 2 * (word * this.#numbers + slot);
        this.#memory[at + 1] = this.#memory[from / 4 + 4 * word]! << 31;
      }
    };
    seed(response, CountedWord.Last);
    if (this.#threeValued) seed(unknown, CountedWord.LastUnknown);
  }

  get #numbers(): number {
    return countedNumbers(this.#threeValued);
  }

  get #bytes(): Uint8Array {
    const length = 8 * this.#numbers * this.#values;
    return new Uint8Array(this.#memory.buffer, this.#counts, length);
  }

  #number(value: number, slot: number): number {
    const at = this.#counts / 4 + 2 * (value * this.#numbers + slot);
    return this.#memory[at]! + 2 ** 32 * this.#memory[at + 1]!;
  }
}

const maskOf = (bits: number): bigint => BigInt.asUintN(64, (1n << BigInt(bits)) - 1n);
