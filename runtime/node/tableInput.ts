import { inputBytes, type TableBytes } from './bytes/inputBytes.js';
import { CsvScanner } from './csvScanner.js';
import { shownName } from './fileForm.js';
import { TableError } from './tableError.js';

/** A table being read: a scanner, and where its bytes come from. */
export class TableInput {
  readonly scanner: CsvScanner;
  readonly #pieces: AsyncIterator<Uint8Array> | Iterator<Uint8Array>;

  /** Reads what `inputBytes` gives for `path`, or `bytes`; `path` is then only printed. */
  constructor(path: string, bytes: TableBytes = inputBytes(path)) {
    this.scanner = new CsvScanner(shownName(path));
    this.#pieces =
      Symbol.asyncIterator in bytes ? bytes[Symbol.asyncIterator]() : bytes[Symbol.iterator]();
  }

  /** Gets more bytes for the scanner; false after the last ones. Throws what the file throws. */
  async more(): Promise<boolean> {
    const piece = await this.#pieces.next();
    if (piece.done) {
      this.scanner.end();
      return false;
    }
    this.scanner.push(piece.value);
    return true;
  }

  /** Goes to the next record, whatever it takes; false after the last one. */
  async next(): Promise<boolean> {
    while (!this.scanner.next()) {
      if (!(await this.more())) return this.scanner.next();
    }
    return true;
  }

  /** The names in the first record. Throws `TableError` for an empty table. */
  async header(): Promise<string[]> {
    if (!(await this.next())) {
      throw new TableError(
        this.scanner.path,
        1,
        1,
        'the table is empty; its first line names ports',
      );
    }
    const { scanner } = this;
    return Array.from({ length: scanner.fieldCount }, (_, field) => scanner.text(field).trim());
  }

  /** Lets go of the file. */
  async close(): Promise<void> {
    await this.#pieces.return?.();
  }
}

/**
 * Checks that the present record has a field for each column; false for a blank line, which counts
 * as a record only where there is one column. Throws `TableError`.
 */
export function hasFields(scanner: CsvScanner, columns: number): boolean {
  const { fieldCount } = scanner;
  if (fieldCount === columns) return true;
  if (fieldCount === 1 && scanner.fieldStart(0) === scanner.fieldEnd(0)) return false;
  const fields = fieldCount === 1 ? '1 field' : `${fieldCount} fields`;
  throw scanner.error(columns, `the row has ${fields}, the header ${columns}`);
}
