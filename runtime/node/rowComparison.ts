import { type ModelLayout, rowStride } from '../layout.js';
import { readBits } from '../rowBits.js';
import { formatValue } from '../valueText.js';
import type { PortColumn } from './columns.js';
import type { Departure } from './departure.js';

/** Packed rows, from word `at` of an array on. */
export interface RowsAt {
  readonly rows: Uint32Array;
  readonly at: number;
}

/** Compares packed rows with packed rows of the same layout in some columns. */
export class RowComparison {
  readonly #columns: readonly PortColumn[];
  readonly #place: string;
  readonly #mask: Uint32Array;
  readonly #unknownWords: number | undefined;
  readonly #stride: number;

  /** `place` is that of all departures. */
  constructor(
    { outputs, threeValued }: ModelLayout,
    columns: readonly PortColumn[],
    place: string,
  ) {
    this.#columns = columns;
    this.#place = place;
    this.#stride = rowStride(outputs, threeValued);
    this.#unknownWords = threeValued ? outputs.words : undefined;
    this.#mask = new Uint32Array(this.#stride);
    for (const { offset, width } of columns) {
      for (let bit = offset; bit < offset + width; bit++) this.#mask[bit >>> 5]! |= 1 << (bit & 31);
    }
    if (threeValued) this.#mask.copyWithin(outputs.words, 0, outputs.words);
  }

  /**
   * Compares `count` rows of a response, the first of cycle `firstCycle`, with as many rows of what
   * is expected; returns their departures in order, at most `most`.
   */
  compare(
    actual: RowsAt,
    expected: RowsAt,
    { firstCycle, count }: { readonly firstCycle: number; readonly count: number },
    most: number,
  ): Departure[] {
    const { rows, at } = actual;
    const { rows: others, at: othersAt } = expected;
    const stride = this.#stride;
    const mask = this.#mask;
    const departures: Departure[] = [];
    for (let row = 0; row < count && departures.length < most; row++) {
      const start = row * stride;
      let difference = 0;
      for (let word = 0; word < stride; word++) {
        const place = start + word;
        difference |= (rows[at + place]! ^ others[othersAt + place]!) & mask[word]!;
      }
      if (difference === 0) continue;
      const found = this.#departures(
        { rows, at: at + start },
        { rows: others, at: othersAt + start },
        firstCycle + row,
      );
      departures.push(...found.slice(0, most - departures.length));
    }
    return departures;
  }

  #departures(actual: RowsAt, expected: RowsAt, cycle: number): Departure[] {
    const toUnknown = this.#unknownWords;
    const text = (column: PortColumn, { rows, at }: RowsAt): string =>
      formatValue(column, rows, at, toUnknown === undefined ? undefined : at + toUnknown);
    return this.#columns.flatMap((column): Departure[] => {
      if (areEqual(actual, expected, column, toUnknown)) return [];
      const values = { expected: text(column, expected), actual: text(column, actual) };
      return [{ cycle, port: column.name, ...values, place: this.#place }];
    });
  }
}

function areEqual(
  actual: RowsAt,
  expected: RowsAt,
  { offset, width }: PortColumn,
  toUnknown: number | undefined,
): boolean {
  for (const group of toUnknown === undefined ? [0] : [0, toUnknown]) {
    for (let bit = 0; bit < width; bit += 32) {
      const count = Math.min(32, width - bit);
      const place = offset + bit;
      const is = readBits(actual.rows, actual.at + group, place, count);
      if (is !== readBits(expected.rows, expected.at + group, place, count)) return false;
    }
  }
  return true;
}
