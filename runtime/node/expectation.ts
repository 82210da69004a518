import { type ModelLayout, rowStride } from '../layout.js';
import type { ResponseBlock } from '../stream.js';
import { formatValue } from '../valueText.js';
import type { TableBytes } from './bytes/inputBytes.js';
import { columnOf, type PortColumn } from './columns.js';
import type { Departure, ResponseChecker } from './departure.js';
import { hasFields, TableInput } from './tableInput.js';
import { ValueParser } from './valueParser.js';

/** Name of the column that tells a row's cycle. */
const CYCLE = 'cycle';

/**
 * Compares a response with an expectation table while both go by, in constant memory.
 *
 * The table has the form of a response table with any of its columns, parts of ports too. With a
 * column `cycle` its rows may be sparse, in ascending order; without one, row k is cycle k. An
 * empty field and `-` match anything, and so does a digit `-` in `0b…`; x matches x alone.
 */
export class ExpectationChecker implements ResponseChecker {
  readonly #input: TableInput;
  readonly #layout: ModelLayout;
  readonly #columns: readonly PortColumn[];
  readonly #columnCount: number;
  readonly #cycleField: number;
  readonly #parser: ValueParser;
  readonly #stride: number;
  /** The cycle of the record that is read and not yet checked; -1 where there is none. */
  #pending = -1;
  #nextCycle = 0;
  #lastCycle = -1;

  /**
   * Reads the header of the file at `path`, or of `bytes` if given (`path` is then the name in
   * messages). Throws `TableError` with the place, and what the file system throws.
   */
  static async open(
    path: string,
    layout: ModelLayout,
    bytes?: TableBytes,
  ): Promise<ExpectationChecker> {
    const input = new TableInput(path, bytes);
    try {
      return new ExpectationChecker(input, layout, await input.header());
    } catch (error) {
      await input.close();
      throw error;
    }
  }

  private constructor(input: TableInput, layout: ModelLayout, header: readonly string[]) {
    this.#input = input;
    this.#layout = layout;
    this.#columnCount = header.length;
    this.#cycleField = header.indexOf(CYCLE);
    this.#columns = columnsOf(input, layout, header);
    const widest = Math.max(0, ...this.#columns.map((column) => column.width));
    this.#parser = new ValueParser(widest, { unknown: layout.threeValued, open: true });
    this.#stride = rowStride(layout.outputs, layout.threeValued);
  }

  /**
   * Compares a block of the response; returns its departures in order, at most `most` of them
   * (default 1). Blocks must come in order and without gaps. Throws as `open` does.
   */
  async check(block: ResponseBlock, most = 1): Promise<Departure[]> {
    const departures: Departure[] = [];
    const end = block.firstCycle + block.cycles;
    while (departures.length < most) {
      // Waiting for a record that is there already would cost more than checking it.
      const isThere = this.#pending >= 0 || this.#take() || (await this.#advance());
      if (!isThere || this.#pending >= end) break;
      this.#compare(block, most, departures);
      this.#pending = -1;
    }
    return departures;
  }

  async skipTo(cycle: number): Promise<void> {
    while (this.#pending >= 0 || this.#take() || (await this.#advance())) {
      if (this.#pending >= cycle) return;
      this.#pending = -1;
    }
  }

  /**
   * The first cycle that the table tells of and the response did not reach, or undefined. Lets go
   * of the file.
   */
  async finish(): Promise<number | undefined> {
    const isLeft = this.#pending >= 0 || (await this.#advance());
    await this.#input.close();
    return isLeft ? this.#pending : undefined;
  }

  /** Lets go of the file. */
  close(): Promise<void> {
    return this.#input.close();
  }

  async #advance(): Promise<boolean> {
    while (!this.#take()) {
      if (!(await this.#input.more())) return this.#take();
    }
    return true;
  }

  // Reads the next record's cycle; the record stays in the scanner until it is checked.
  #take(): boolean {
    const { scanner } = this.#input;
    while (scanner.next()) {
      if (!hasFields(scanner, this.#columnCount)) continue;
      this.#pending = this.#cycleField < 0 ? this.#nextCycle++ : this.#readCycle();
      return true;
    }
    return false;
  }

  #readCycle(): number {
    const { scanner } = this.#input;
    const cycle = scanner.count(this.#cycleField);
    if (Number.isNaN(cycle)) {
      const text = scanner.text(this.#cycleField).trim();
      throw scanner.error(this.#cycleField, `cycle is ${text || 'empty'}: expected a number`);
    }
    if (cycle <= this.#lastCycle) {
      const rule = `cycle ${cycle} comes after cycle ${this.#lastCycle}; cycles must ascend`;
      throw scanner.error(this.#cycleField, rule);
    }
    this.#lastCycle = cycle;
    return cycle;
  }

  #compare(block: ResponseBlock, most: number, departures: Departure[]): void {
    const { scanner } = this.#input;
    const at = (this.#pending - block.firstCycle) * this.#stride;
    const { outputs, threeValued } = this.#layout;
    const unknownAt = threeValued ? at + outputs.words : undefined;
    for (const column of this.#columns) {
      const start = scanner.fieldStart(column.field);
      const end = scanner.fieldEnd(column.field);
      if (start === end) continue;
      const refusal = this.#parser.parse(scanner.bytes, start, end, column.width);
      if (refusal) {
        const text = `${column.name} is ${this.#expected(column)}: ${refusal}`;
        throw scanner.error(column.field, text);
      }
      if (this.#parser.matches(column, block.rows, at, unknownAt)) continue;
      const place = scanner.place(column.field);
      departures.push({
        cycle: this.#pending,
        port: column.name,
        expected: this.#expected(column),
        actual: formatValue(column, block.rows, at, unknownAt),
        place: `${scanner.path}:${place.line}:${place.column}`,
      });
      if (departures.length === most) return;
    }
  }

  #expected({ field }: PortColumn): string {
    return this.#input.scanner.text(field).trim();
  }
}

function columnsOf(
  input: TableInput,
  layout: ModelLayout,
  header: readonly string[],
): PortColumn[] {
  const columns: PortColumn[] = [];
  header.forEach((name, field) => {
    if (header.indexOf(name) < field) {
      throw input.scanner.error(field, `two columns are named ${name}`);
    }
    // An output port may itself be named `cycle`; the first column of a response is not that port.
    if (name === CYCLE) return;
    const column = columnOf(name, field, layout.outputs);
    if (typeof column === 'string') throw input.scanner.error(field, column);
    columns.push(column);
  });
  return columns;
}
