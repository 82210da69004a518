import type { Engine } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';
import { powerUpState } from '../circuit/powerUp.js';
import type { Design } from '../compile.js';

/** Words that stimulus and response take together, so that they stay in the second-level cache. */
const BUFFER_WORDS = 1 << 15;

/** Cycles for which each row is held where inputs hardly change. */
export const HELD_CYCLES = 64;

const FEWEST_ROWS = 64;
const MOST_ROWS = 4096;

/** Any number will do, as long as it is the same each time. */
const SEED = 1;

/** The rows that all engines are measured on, over and over, and room for a response to each. */
export class BenchRows {
  readonly count: number;
  readonly stimulus: Uint32Array;
  /** The power-up state that responses start from. */
  readonly state: Uint8Array;
  readonly #response: Uint32Array;
  readonly #stimulusStride: number;
  readonly #responseStride: number;

  constructor({ circuit, layout }: Design) {
    const { inputs, outputs, threeValued } = layout;
    this.#stimulusStride = rowStride(inputs, threeValued);
    this.#responseStride = rowStride(outputs, threeValued);
    const words = Math.max(1, this.#stimulusStride + this.#responseStride);
    const fitting = Math.floor(BUFFER_WORDS / words);
    this.count = Math.min(MOST_ROWS, Math.max(FEWEST_ROWS, fitting));
    this.stimulus = new Uint32Array(this.count * this.#stimulusStride);
    this.#response = new Uint32Array(this.count * this.#responseStride);
    fillRandomRows(new RandomBits(SEED), inputs, this.stimulus, this.count, this.#stimulusStride);
    this.state = powerUpState(circuit, threeValued ? 'unknown' : 'zero');
  }

  /** Runs an engine on rows from one row on; returns their packed response, valid until the next call. */
  play(engine: Engine, from: number, cycles: number): Uint32Array {
    const stimulus = this.stimulus.subarray(from * this.#stimulusStride);
    engine.run(cycles, stimulus, this.#stimulusStride, this.#response);
    return this.#response.subarray(0, cycles * this.#responseStride);
  }

  /** Nanoseconds that an engine takes for a number of cycles, the rows being repeated. */
  time(engine: Engine, cycles: number): number {
    const start = performance.now();
    for (let left = cycles; left > 0; left -= this.count) {
      this.play(engine, 0, Math.min(left, this.count));
    }
    return (performance.now() - start) * 1e6;
  }

  /** The same with each row held for `HELD_CYCLES` cycles. */
  timeHeld(engine: Engine, cycles: number): number {
    const start = performance.now();
    for (let left = cycles, row = 0; left > 0; left -= HELD_CYCLES, row = (row + 1) % this.count) {
      const stimulus = this.stimulus.subarray(row * this.#stimulusStride);
      engine.run(Math.min(left, HELD_CYCLES), stimulus, 0, this.#response);
    }
    return (performance.now() - start) * 1e6;
  }
}
