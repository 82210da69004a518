import { inputBytes, type TableBytes } from '../bytes/inputBytes.js';
import { shownName } from '../fileForm.js';
import { TableError } from '../tableError.js';

const LF = 0x0a;
const SPACE = 0x20;

// A token must fit in memory; no value or name is longer.
const LONGEST_TOKEN = 1 << 24;

/**
 * The words of a value change dump (IEEE 1364-2005, clause 18), which stand between white space.
 *
 * `start` and `end` tell where in `bytes` the present one is, until the next call of `next` or
 * `more`.
 */
export class VcdTokens {
  readonly path: string;
  bytes: Uint8Array = new Uint8Array(0);
  start = 0;
  end = 0;
  readonly #pieces: AsyncIterator<Uint8Array> | Iterator<Uint8Array>;
  #isEnded = false;
  /** Line of the first of `bytes`, and the place of that byte in it. */
  #line = 1;
  #column = 1;

  /** Reads what `inputBytes` gives for `path`, or `bytes`; `path` is then only printed. */
  constructor(path: string, bytes: TableBytes = inputBytes(path)) {
    this.path = shownName(path);
    this.#pieces =
      Symbol.asyncIterator in bytes ? bytes[Symbol.asyncIterator]() : bytes[Symbol.iterator]();
  }

  /** Goes to the next word; false where it is not all there yet, or after the last one. */
  next(): boolean {
    const { bytes } = this;
    const { length } = bytes;
    let start = this.end;
    while (start < length && bytes[start]! <= SPACE) start++;
    let end = start;
    while (end < length && bytes[end]! > SPACE) end++;
    if (end === start || (end === length && !this.#isEnded)) return false;
    this.start = start;
    this.end = end;
    return true;
  }

  /** Goes back, so that the word at `start` is the next one. */
  backTo(start: number): void {
    this.start = start;
    this.end = start;
  }

  /** Gets more bytes; false after the last ones. Throws what the file throws. */
  async more(): Promise<boolean> {
    const piece = await this.#pieces.next();
    if (piece.done) {
      this.#isEnded = true;
      return false;
    }
    const rest = this.bytes.subarray(this.end);
    if (rest.length > LONGEST_TOKEN) throw this.#errorAt(this.end, 'a word is too long');
    this.#pass(this.end);
    this.bytes = new Uint8Array(rest.length + piece.value.length);
    this.bytes.set(rest);
    this.bytes.set(piece.value, rest.length);
    this.start = 0;
    this.end = 0;
    return true;
  }

  /** Goes to the next word, whatever it takes; false after the last one. */
  async await(): Promise<boolean> {
    while (!this.next()) {
      if (!(await this.more())) return this.next();
    }
    return true;
  }

  /** The present word. */
  text(): string {
    return new TextDecoder().decode(this.bytes.subarray(this.start, this.end));
  }

  /** An error at the present word. */
  error(reason: string): TableError {
    return this.#errorAt(this.start, reason);
  }

  /** Lets go of the file. */
  async close(): Promise<void> {
    await this.#pieces.return?.();
  }

  #errorAt(at: number, reason: string): TableError {
    this.#pass(at);
    return new TableError(this.path, this.#line, this.#column, reason);
  }

  #pass(end: number): void {
    let lineStart = -1;
    for (let at = 0; at < end; at++) {
      if (this.bytes[at] !== LF) continue;
      this.#line++;
      lineStart = at + 1;
    }
    this.#column = lineStart < 0 ? this.#column + end : end - lineStart + 1;
  }
}
