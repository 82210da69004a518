import { type ModelLayout, rowStride } from '../layout.js';
import { columnOf, type PortColumn } from './columns.js';

/** Which part of a response is written; all of it unless given. */
export interface ResponseChoice {
  /** Output ports or parts of them (`v[7:4]`), in the order of the columns wanted. */
  readonly ports?: readonly string[];
  /** Only the cycles 0, `every`, twice `every` and so on. */
  readonly every?: number;
  /** Only rows that differ from the one written before. */
  readonly changes?: boolean;
}

/** Chooses columns and rows of a response. */
export class ResponseChooser {
  readonly columns: readonly PortColumn[];
  /** Whether there is a row for every cycle. */
  readonly isEveryRow: boolean;
  readonly #every: number;
  /** The bits of a row that are looked at for changes; undefined where rows need not differ. */
  readonly #mask: Uint32Array | undefined;
  readonly #last: Uint32Array;
  #hasLast = false;

  /** Throws RangeError for a port that is none, one named twice, and a bad `every`. */
  constructor(layout: ModelLayout, { ports, every = 1, changes = false }: ResponseChoice = {}) {
    if (!Number.isSafeInteger(every) || every < 1) {
      throw new RangeError(`every is a whole number from 1 on, got ${every}`);
    }
    const { outputs, threeValued } = layout;
    const names = ports ?? outputs.ports.map(({ name }) => name);
    this.columns = names.map((name, field) => {
      const column = columnOf(name, field, outputs);
      if (typeof column === 'string') throw new RangeError(column);
      if (names.indexOf(name) < field) throw new RangeError(`${name} is named twice`);
      return column;
    });
    this.#every = every;
    this.isEveryRow = every === 1 && !changes;
    this.#last = new Uint32Array(rowStride(outputs, threeValued));
    if (changes) this.#mask = maskOf(this.columns, outputs.words, threeValued);
  }

  /** Whether the row of a cycle, at word `at`, is wanted; it is then the last one written. */
  takes(cycle: number, rows: Uint32Array, at: number): boolean {
    if (this.#every > 1 && cycle % this.#every !== 0) return false;
    if (this.#mask === undefined) return true;
    const isNew = !this.#hasLast || this.#differs(this.#mask, rows, at);
    if (!isNew) return false;
    this.#hasLast = true;
    for (let word = 0; word < this.#last.length; word++) this.#last[word] = rows[at + word]!;
    return true;
  }

  #differs(mask: Uint32Array, rows: Uint32Array, at: number): boolean {
    for (let word = 0; word < mask.length; word++) {
      if (((rows[at + word]! ^ this.#last[word]!) & mask[word]!) !== 0) return true;
    }
    return false;
  }
}

function maskOf(columns: readonly PortColumn[], words: number, threeValued: boolean): Uint32Array {
  const mask = new Uint32Array(threeValued ? words * 2 : words);
  for (const { offset, width } of columns) {
    for (let bit = offset; bit < offset + width; bit++) mask[bit >>> 5]! |= 1 << (bit & 31);
  }
  if (threeValued) mask.copyWithin(words, 0, words);
  return mask;
}
