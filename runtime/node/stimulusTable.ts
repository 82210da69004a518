import { type ModelLayout, rowStride } from '../layout.js';
import { blockCycles, type StimulusBlock } from '../stream.js';
import { columnOf, overlap, type PortColumn } from './columns.js';
import type { CsvScanner } from './csvScanner.js';
import { hasFields, type TableBytes, TableInput } from './tableInput.js';
import { putWords, ValueParser } from './valueParser.js';

/** Name of the column that tells for how many cycles a row lasts. */
const DURATION = '@cycles';

/** Rows that last longer than this are handed out on their own, held. */
const LONGEST_COPIED = 16;

/**
 * Reads a stimulus table (comma-separated values, RFC 4180) in constant memory.
 *
 * The header names input ports, or parts of vectors as `port[3]` and `port[7:4]`. A value is
 * decimal, `0x…` or `0b…`; in three-valued models x and z digits may stand in the latter two, or
 * alone. An empty field holds the value of the row before, 0 in the first row, and so do ports
 * that the header does not name. A column `@cycles` tells for how many cycles a row lasts (default
 * 1). Blank lines are skipped, but in a table of one column they are rows with an empty field.
 *
 * Reads the file at `path`, or `bytes` if given (`path` is then the name in messages). The blocks'
 * arrays are used again. Throws `TableError` with the place, and what the file system throws.
 */
export async function* readStimulus(
  path: string,
  layout: ModelLayout,
  bytes?: TableBytes,
): AsyncGenerator<StimulusBlock, void, undefined> {
  const input = new TableInput(path, bytes);
  try {
    const rows = new StimulusRows(input.scanner, layout, await input.header());
    do {
      for (let block = rows.next(); block !== undefined; block = rows.next()) yield block;
    } while (await input.more());
    for (let block = rows.next(); block !== undefined; block = rows.next()) yield block;
    const last = rows.rest();
    if (last) yield last;
  } finally {
    await input.close();
  }
}

/** Turns records into blocks of packed rows. */
class StimulusRows {
  readonly #scanner: CsvScanner;
  readonly #columns: readonly PortColumn[];
  readonly #columnCount: number;
  readonly #duration: number;
  readonly #parser: ValueParser;
  readonly #unknownAt: number | undefined;
  readonly #stride: number;
  readonly #most: number;
  readonly #rows: Uint32Array;
  readonly #row: Uint32Array;
  #count = 0;
  /** Cycles for which the present row is still to be handed out, on its own. */
  #held = 0;

  constructor(scanner: CsvScanner, layout: ModelLayout, header: readonly string[]) {
    this.#scanner = scanner;
    this.#columnCount = header.length;
    this.#duration = header.indexOf(DURATION);
    this.#columns = columnsOf(scanner, layout, header);
    const widest = Math.max(0, ...this.#columns.map((column) => column.width));
    this.#parser = new ValueParser(widest, { unknown: layout.threeValued, open: false });
    this.#unknownAt = layout.threeValued ? layout.inputs.words : undefined;
    this.#stride = rowStride(layout.inputs, layout.threeValued);
    this.#most = blockCycles(this.#stride);
    this.#rows = new Uint32Array(this.#most * this.#stride);
    this.#row = new Uint32Array(this.#stride);
  }

  /** The next block from the records that are there; undefined where they do not fill one. */
  next(): StimulusBlock | undefined {
    if (this.#held > 0) return this.#holdRow();
    while (this.#count < this.#most) {
      if (!this.#scanner.next()) return undefined;
      if (!hasFields(this.#scanner, this.#columnCount)) continue;
      this.#readRow();
      const cycles = this.#cycles();
      if (cycles > Math.min(LONGEST_COPIED, this.#most - this.#count)) {
        this.#held = cycles;
        return this.rest() ?? this.#holdRow();
      }
      for (let i = 0; i < cycles; i++) this.#rows.set(this.#row, this.#count++ * this.#stride);
    }
    return this.rest();
  }

  /** What has been gathered of a block, if anything. */
  rest(): StimulusBlock | undefined {
    if (this.#count === 0) return undefined;
    const cycles = this.#count;
    this.#count = 0;
    return { cycles, rows: this.#rows, stride: this.#stride };
  }

  #holdRow(): StimulusBlock {
    const cycles = this.#held;
    this.#held = 0;
    return { cycles, rows: this.#row, stride: 0 };
  }

  #readRow(): void {
    const { bytes } = this.#scanner;
    const parser = this.#parser;
    for (const { field, offset, width } of this.#columns) {
      const start = this.#scanner.fieldStart(field);
      const end = this.#scanner.fieldEnd(field);
      if (start === end) continue;
      const refusal = parser.parse(bytes, start, end, width);
      if (refusal) throw this.#error(field, refusal);
      putWords(this.#row, 0, offset, width, parser.value);
      if (this.#unknownAt !== undefined) {
        putWords(this.#row, this.#unknownAt, offset, width, parser.unknown);
      }
    }
  }

  #cycles(): number {
    if (this.#duration < 0) return 1;
    const isEmpty =
      this.#scanner.fieldStart(this.#duration) === this.#scanner.fieldEnd(this.#duration);
    const cycles = isEmpty ? 1 : this.#scanner.count(this.#duration);
    if (cycles > 0) return cycles;
    throw this.#error(this.#duration, 'a row lasts a whole number of cycles, at least 1');
  }

  #error(field: number, reason: string): Error {
    const column = this.#columns.find((candidate) => candidate.field === field);
    const text = this.#scanner.text(field);
    return this.#scanner.error(field, `${column?.name ?? DURATION} is ${text}: ${reason}`);
  }
}

function columnsOf(
  scanner: CsvScanner,
  layout: ModelLayout,
  header: readonly string[],
): PortColumn[] {
  const columns: PortColumn[] = [];
  header.forEach((name, field) => {
    if (name === DURATION) {
      if (header.indexOf(name) < field) throw scanner.error(field, `two columns are named ${name}`);
      return;
    }
    const column = columnOf(name, field, layout.inputs);
    const clock = layout.clocks.find((candidate) => isPartOf(candidate, name, column, layout));
    if (clock) throw scanner.error(field, `${clock} is a clock: it ticks by itself; leave it out`);
    if (typeof column === 'string') throw scanner.error(field, column);
    columns.push(column);
  });
  const shared = overlap(columns);
  if (shared) {
    const [first, second] = shared;
    throw scanner.error(second.field, `${second.name} shares bits with column ${first.name}`);
  }
  return columns;
}

// A vector with clock bits is in the row unless all of its bits are clocks.
function isPartOf(
  clock: string,
  name: string,
  column: PortColumn | string,
  layout: ModelLayout,
): boolean {
  if (clock === name || clock.startsWith(`${name}[`)) return true;
  const bit = columnOf(clock, 0, layout.inputs);
  if (typeof column === 'string' || typeof bit === 'string') return false;
  return bit.offset >= column.offset && bit.offset < column.offset + column.width;
}
