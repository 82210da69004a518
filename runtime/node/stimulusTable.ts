import { type ModelLayout, rowStride } from '../layout.js';
import { RowGatherer } from '../rowGatherer.js';
import type { StimulusBlock } from '../stream.js';
import type { TableBytes } from './bytes/inputBytes.js';
import { columnOf, overlap, type PortColumn } from './columns.js';
import type { CsvScanner } from './csvScanner.js';
import { hasFields, TableInput } from './tableInput.js';
import { putWords, ValueParser } from './valueParser.js';

/** Name of the column that tells for how many cycles a row lasts. */
const DURATION = '@cycles';

const ZERO = 0x30;

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
    // What has come is run before more is awaited: whoever writes may wait for the response.
    do yield* rows.all();
    while (await input.more());
    yield* rows.all();
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
  readonly #gatherer: RowGatherer;

  constructor(scanner: CsvScanner, layout: ModelLayout, header: readonly string[]) {
    this.#scanner = scanner;
    this.#columnCount = header.length;
    this.#duration = header.indexOf(DURATION);
    this.#columns = columnsOf(scanner, layout, header);
    const widest = Math.max(0, ...this.#columns.map((column) => column.width));
    this.#parser = new ValueParser(widest, { unknown: layout.threeValued, open: false });
    this.#unknownAt = layout.threeValued ? layout.inputs.words : undefined;
    this.#gatherer = new RowGatherer(rowStride(layout.inputs, layout.threeValued));
  }

  /** All the records that are there. */
  *all(): Generator<StimulusBlock, void, undefined> {
    while (this.#scanner.next()) {
      if (!hasFields(this.#scanner, this.#columnCount)) continue;
      this.#readRow();
      if (this.#gatherer.add(this.#cycles())) yield* this.#gatherer.take();
    }
    yield* this.#gatherer.take();
  }

  #readRow(): void {
    const { bytes } = this.#scanner;
    const parser = this.#parser;
    const { row } = this.#gatherer;
    for (const { field, offset, width } of this.#columns) {
      const start = this.#scanner.fieldStart(field);
      const end = this.#scanner.fieldEnd(field);
      if (start === end) continue;
      // Most columns of wide tables are single bits, and most of their values 0 and 1.
      if (width === 1 && end === start + 1 && (bytes[start]! & ~1) === ZERO) {
        this.#setBit(row, offset, bytes[start]! & 1);
        continue;
      }
      const refusal = parser.parse(bytes, start, end, width);
      if (refusal) throw this.#error(field, refusal);
      putWords(row, 0, offset, width, parser.value);
      if (this.#unknownAt !== undefined) {
        putWords(row, this.#unknownAt, offset, width, parser.unknown);
      }
    }
  }

  #setBit(row: Uint32Array, offset: number, bit: number): void {
    const word = offset >>> 5;
    const mask = 1 << (offset & 31);
    row[word] = bit === 1 ? row[word]! | mask : row[word]! & ~mask;
    if (this.#unknownAt !== undefined) row[this.#unknownAt + word]! &= ~mask;
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
