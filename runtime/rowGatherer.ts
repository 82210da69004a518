import { blockCycles, type StimulusBlock } from './stream.js';

/** Rows that last longer than this are handed out on their own, held. */
const LONGEST_COPIED = 16;

/** Gathers rows into blocks of stimulus. */
export class RowGatherer {
  /** The present row; its maker changes it from one `add` to the next. */
  readonly row: Uint32Array;
  readonly #stride: number;
  readonly #most: number;
  readonly #rows: Uint32Array;
  #count = 0;
  /** Cycles for which the present row is still to be handed out, on its own. */
  #held = 0;

  /** For rows of `stride` words. */
  constructor(stride: number) {
    this.#stride = stride;
    this.#most = blockCycles(stride);
    this.#rows = new Uint32Array(this.#most * stride);
    this.row = new Uint32Array(stride);
  }

  /** Adds the present row for some cycles. Where it returns true, `take` must come next. */
  add(cycles: number): boolean {
    if (cycles > Math.min(LONGEST_COPIED, this.#most - this.#count)) {
      this.#held = cycles;
      return true;
    }
    for (let i = 0; i < cycles; i++) {
      const at = this.#count++ * this.#stride;
      for (let word = 0; word < this.#stride; word++) this.#rows[at + word] = this.row[word]!;
    }
    return this.#count === this.#most;
  }

  /** Hands out what has been added; each block is good until the next one is asked for. */
  *take(): Generator<StimulusBlock, void, undefined> {
    const cycles = this.#count;
    this.#count = 0;
    if (cycles > 0) yield { cycles, rows: this.#rows, stride: this.#stride };
    const held = this.#held;
    this.#held = 0;
    if (held > 0) yield { cycles: held, rows: this.row, stride: 0 };
  }
}
