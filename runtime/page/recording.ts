import type { PortLayout } from '../layout.js';
import { readValue, type Value } from '../model/values.js';

const MOST_CYCLES = 1 << 16;
const MOST_WORDS = 1 << 23;

/** How rows of a model are laid out. */
export interface RowShape {
  readonly inputWords: number;
  readonly outputWords: number;
  readonly threeValued: boolean;
}

/** The packed rows of the last cycles, in rings: what went in and what came out. */
export class Recording {
  /** Number of the first cycle that is still there, and of the one after the last. */
  first = 0;
  end = 0;
  readonly capacity: number;
  readonly shape: RowShape;
  readonly #inputs: Uint32Array;
  readonly #outputs: Uint32Array;

  constructor(shape: RowShape) {
    this.shape = shape;
    const words = Math.max(1, shape.inputWords + shape.outputWords);
    this.capacity = Math.max(256, Math.min(MOST_CYCLES, Math.floor(MOST_WORDS / words)));
    this.#inputs = new Uint32Array(this.capacity * shape.inputWords);
    this.#outputs = new Uint32Array(this.capacity * shape.outputWords);
  }

  /** Forgets everything; the next cycle is number `cycle`. */
  restart(cycle: number): void {
    this.first = cycle;
    this.end = cycle;
  }

  /** Adds cycles; with stride 0 the one row of inputs was held. */
  add(cycles: number, inputs: Uint32Array, stride: number, outputs: Uint32Array): void {
    const { inputWords, outputWords } = this.shape;
    for (let i = Math.max(0, cycles - this.capacity); i < cycles; ) {
      const at = (this.end + i) % this.capacity;
      const rows = Math.min(cycles - i, this.capacity - at);
      this.#outputs.set(
        outputs.subarray(i * outputWords, (i + rows) * outputWords),
        at * outputWords,
      );
      const given = stride === 0 ? 1 : rows;
      const from = i * stride;
      this.#inputs.set(inputs.subarray(from, from + given * inputWords), at * inputWords);
      repeat(this.#inputs, at * inputWords, inputWords, given, rows);
      i += rows;
    }
    this.end += cycles;
    this.first = Math.max(this.first, this.end - this.capacity);
  }

  has(cycle: number): boolean {
    return cycle >= this.first && cycle < this.end;
  }

  /** The value of a port in a cycle that is there. */
  value(port: PortLayout, isInput: boolean, cycle: number): Value {
    const { threeValued } = this.shape;
    const words = isInput ? this.#inputs : this.#outputs;
    const stride = isInput ? this.shape.inputWords : this.shape.outputWords;
    const at = (cycle % this.capacity) * stride;
    return readValue({ words, at, unknownAt: threeValued ? at + stride / 2 : undefined }, port);
  }

  /** A copy of the row of inputs of a cycle that is there. */
  inputRow(cycle: number): Uint32Array {
    const at = (cycle % this.capacity) * this.shape.inputWords;
    return this.#inputs.slice(at, at + this.shape.inputWords);
  }
}

// Makes the first rows of an array, of which some are there, fill more of it.
function repeat(words: Uint32Array, at: number, width: number, given: number, rows: number): void {
  for (let there = given; there < rows; there *= 2) {
    const more = Math.min(there, rows - there);
    words.copyWithin(at + there * width, at, at + more * width);
  }
}
