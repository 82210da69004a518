import { type BitCopy, copyBits } from '../../bitCopies.js';
import { type ModelLayout, rowStride } from '../../layout.js';
import type { ResponseBlock } from '../../stream.js';
import type { TableBytes } from '../bytes/inputBytes.js';
import type { Departure, ResponseChecker } from '../departure.js';
import { shownName, wholeFileError } from '../fileForm.js';
import { RowComparison, type RowsAt } from '../rowComparison.js';
import { columnsIn, copiesTo } from './columnCopies.js';
import { groupWords, rowWords } from './packedHeader.js';
import { cycleAt, cycleError, PackedInput } from './packedInput.js';

/**
 * Compares a response with packed rows, in constant memory; see `packedHeader.ts` for the form.
 *
 * All columns are compared in all rows; x matches x alone. With cycles, rows may be sparse.
 */
export class PackedExpectation implements ResponseChecker {
  readonly #input: PackedInput;
  readonly #copies: readonly BitCopy[];
  readonly #comparison: RowComparison;
  readonly #stride: number;
  readonly #unknownWords: number | undefined;
  /** A row of what is expected in the layout of the response. */
  readonly #row: Uint32Array;
  readonly #isSame: boolean;
  #words: Uint32Array = new Uint32Array(0);
  /** Where in `#words` the next row is. */
  #at = 0;
  /** Of the next row; without cycles in the file, its number. */
  #cycle = 0;
  #lastCycle = -1;

  /** Reads the header of the file at `path`, or of `bytes`. Throws as `PackedInput.open` does. */
  static async open(
    path: string,
    layout: ModelLayout,
    bytes?: TableBytes,
  ): Promise<PackedExpectation> {
    const input = await PackedInput.open(path, bytes);
    try {
      return new PackedExpectation(input, layout);
    } catch (error) {
      await input.close();
      throw error;
    }
  }

  private constructor(input: PackedInput, layout: ModelLayout) {
    const { path, shape } = input;
    const { outputs, threeValued } = layout;
    const columns = columnsIn(path, shape, outputs);
    this.#input = input;
    this.#copies = copiesTo(columns);
    this.#comparison = new RowComparison(layout, columns, shownName(path));
    this.#stride = rowStride(outputs, threeValued);
    this.#unknownWords = threeValued ? outputs.words : undefined;
    this.#row = new Uint32Array(this.#stride);
    const [only] = this.#copies;
    const isWhole = this.#copies.length === 1 && only!.to === 0 && only!.width === outputs.bits;
    this.#isSame = isWhole && shape.threeValued === threeValued && !shape.numbered;
  }

  async check({ firstCycle, cycles, rows }: ResponseBlock, most: number): Promise<Departure[]> {
    const departures: Departure[] = [];
    while (departures.length < most) {
      const isThere = this.#at < this.#words.length || (await this.#more());
      if (!isThere || this.#cycle >= firstCycle + cycles) break;
      const actual = { rows, at: (this.#cycle - firstCycle) * this.#stride };
      const room = most - departures.length;
      const found = this.#isSame
        ? this.#compareMany(actual, firstCycle + cycles, room)
        : this.#compareRow(actual, room);
      departures.push(...found);
    }
    return departures;
  }

  async skipTo(cycle: number): Promise<void> {
    const { shape } = this.#input;
    while (this.#at < this.#words.length || (await this.#more())) {
      if (this.#cycle >= cycle) return;
      this.#at += rowWords(shape);
      if (shape.numbered) this.#readCycle();
      else this.#cycle++;
    }
  }

  async finish(): Promise<number | undefined> {
    const isLeft = this.#at < this.#words.length || (await this.#more());
    await this.close();
    return isLeft ? this.#cycle : undefined;
  }

  close(): Promise<void> {
    return this.#input.close();
  }

  #compareMany(actual: RowsAt, end: number, most: number): Departure[] {
    const expected = { rows: this.#words, at: this.#at };
    const there = (this.#words.length - this.#at) / this.#stride;
    const range = { firstCycle: this.#cycle, count: Math.min(there, end - this.#cycle) };
    this.#at += range.count * this.#stride;
    this.#cycle += range.count;
    return this.#comparison.compare(actual, expected, range, most);
  }

  #compareRow(actual: RowsAt, most: number): Departure[] {
    const { shape } = this.#input;
    const values = this.#at + (shape.numbered ? 2 : 0);
    copyBits(this.#copies, this.#words, values, this.#row, 0);
    if (shape.threeValued) this.#copyUnknown(values + groupWords(shape));
    const range = { firstCycle: this.#cycle, count: 1 };
    this.#at += rowWords(shape);
    if (shape.numbered) this.#readCycle();
    else this.#cycle++;
    return this.#comparison.compare(actual, { rows: this.#row, at: 0 }, range, most);
  }

  #copyUnknown(at: number): void {
    if (this.#unknownWords !== undefined) {
      copyBits(this.#copies, this.#words, at, this.#row, this.#unknownWords);
      return;
    }
    const unknown = this.#words.subarray(at, at + groupWords(this.#input.shape));
    if (unknown.every((word) => word === 0)) return;
    const text = `cycle ${this.#cycle} has an x, which needs a three-valued run`;
    throw wholeFileError(this.#input.path, text);
  }

  async #more(): Promise<boolean> {
    const words = await this.#input.next();
    if (words === undefined) return false;
    this.#words = words;
    this.#at = 0;
    if (this.#input.shape.numbered) this.#readCycle();
    return true;
  }

  // Of the next row, if it is there already.
  #readCycle(): void {
    if (this.#at >= this.#words.length) return;
    this.#cycle = cycleAt(this.#words, this.#at);
    if (this.#cycle <= this.#lastCycle || !Number.isSafeInteger(this.#cycle)) {
      throw cycleError(this.#input.path, this.#cycle, this.#lastCycle);
    }
    this.#lastCycle = this.#cycle;
  }
}
