import { setImmediate } from 'node:timers/promises';
import type { Engine } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { blockCycles } from '../../runtime/stream.js';

/** How long a run may keep events waiting. */
const PAUSE_MS = 50;

/** Inputs that stay as they are, or come again and again, from some cycle on. */
export class HeldInputs {
  /** The cycle from which on this is so. */
  readonly start: number;
  /** Cycles after which the rows come again; 1 where one row is held. */
  readonly period: number;
  readonly #stride: number;
  /** The rows, repeated as often as they fit a block. */
  readonly #rows: Uint32Array;
  readonly #cycles: number;

  /** `rows` are the packed rows of one period. */
  constructor(engine: Engine, start: number, rows: Uint32Array) {
    const { inputs, threeValued } = engine.layout;
    this.start = start;
    this.#stride = rowStride(inputs, threeValued);
    this.period = this.#stride === 0 ? 1 : rows.length / this.#stride;
    const times = Math.max(1, Math.floor(blockCycles(this.#stride) / this.period));
    this.#cycles = this.period * times;
    this.#rows = new Uint32Array(this.#cycles * this.#stride);
    for (let i = 0; i < times; i++) this.#rows.set(rows, i * rows.length);
  }

  /**
   * Runs an engine from a cycle on, and lets events be handled in between. Throws the reason of
   * `interrupt` once it is aborted.
   */
  async run(engine: Engine, cycle: number, cycles: number, interrupt?: AbortSignal): Promise<void> {
    let nextPause = performance.now() + PAUSE_MS;
    for (let done = 0; done < cycles; ) {
      const phase = (cycle + done - this.start) % this.period;
      const count = Math.min(cycles - done, this.#cycles - phase);
      // One row is as good as many equal ones, and not copied.
      if (this.period === 1) engine.run(count, this.#rows, 0, undefined);
      else engine.run(count, this.#rows.subarray(phase * this.#stride), this.#stride, undefined);
      done += count;
      if (performance.now() < nextPause) continue;
      await setImmediate();
      interrupt?.throwIfAborted();
      nextPause = performance.now() + PAUSE_MS;
    }
  }
}
