import type { Position } from '../../diagnostics/sourceMap.js';
import { Char, isSpace } from '../verilog/characters.js';
import type { Problems } from '../verilog/problems.js';
import { endOfLine } from '../verilog/textEnds.js';
import { type Scanner, Token } from './scanner.js';
import { firstBareString } from './textEnds.js';

const MAX_RESUMES = 8;
const MAX_SHOWN = 40;

/** Reports the faults of one text, and finds the places after them where reading can go on. */
export class Recovery {
  readonly #scanner: Scanner;
  readonly #problems: Problems;
  readonly #reported = new Set<string>();
  #resumes = 0;

  constructor(scanner: Scanner, problems: Problems) {
    this.#scanner = scanner;
    this.#problems = problems;
  }

  /** Reports a fault, of the token unless a place is given. */
  fault(
    message: string,
    start: Position = this.#scanner.position,
    end: Position = this.#scanner.endPosition,
  ): void {
    this.#problems.add('syntax-error', message, start, end);
  }

  /**
   * Reports that the token should be something else, and leaves the statement. `isFirst` tells that
   * the token is the statement's first.
   */
  unexpected(expected: string, isFirst = false): void {
    const scanner = this.#scanner;
    // A string or comment without end is all that there is to say about the end of the text.
    if (scanner.token !== Token.End) {
      this.fault(
        `expected ${expected}, got ${shortened(scanner.slice(scanner.start, scanner.end))}`,
      );
    } else if (scanner.openEnd < 0) this.fault(`expected ${expected} before the end of the text`);
    this.#leaveStatement(isFirst);
  }

  /** Reports, once for each kind of container, what cannot stand outside of it. */
  outside(what: string, container: string, start: Position): void {
    if (this.#reported.has(container)) return;
    this.#reported.add(container);
    const message = `${what} stands outside of any ${container}; is there a '}' too many before it?`;
    this.fault(message, start, start + what.length);
  }

  /** Reports something whose closing character is missing at the end of the text; only the innermost. */
  unclosed(what: string, start: Position, end: Position, closing = '}'): void {
    if (this.#scanner.openEnd >= 0 || this.#reported.has('')) return;
    this.#reported.add('');
    this.fault(
      `${what} is not closed; a '${closing}' is missing before the end of the text`,
      start,
      end,
    );
  }

  /** Reports a string or comment that has no end. */
  reportOpenEnd(): void {
    const { bytes, base, openEnd } = this.#scanner;
    if (openEnd < 0) return;
    this.#reported.add('');
    const isString = bytes[openEnd] === Char.Quote;
    const bare = isString ? firstBareString(bytes) : -1;
    const start = base + (bare < 0 ? openEnd : bare);
    const message = isString
      ? "a quote is missing: strings are open to the end of the text, and this one goes over a line end without '\\'"
      : 'the comment that begins here has no end';
    this.fault(message, start, start + (isString ? 1 : 2));
  }

  /**
   * Goes on at the next line that begins with a cell, after a group or arguments of which the end
   * is missing. Whether there is such a line; otherwise the text ends here.
   */
  resume(kind: string, start: Position, closing: string): boolean {
    const scanner = this.#scanner;
    const from = start - scanner.base;
    scanner.goTo(from);
    do scanner.next();
    while (scanner.token !== Token.End);
    this.unclosed(kind, start, start + kind.length, closing);
    this.reportOpenEnd();
    const cell = ++this.#resumes > MAX_RESUMES ? -1 : cellLine(scanner.bytes, from);
    scanner.goTo(cell < 0 ? scanner.bytes.length : cell);
    scanner.openEnd = -1;
    scanner.next();
    return cell >= 0;
  }

  /** Goes after the `;` or to the end of the line, past a group that begins there. */
  #leaveStatement(isFirst: boolean): void {
    const scanner = this.#scanner;
    for (let isStart = isFirst; ; isStart = false) {
      const { token } = scanner;
      if (token === Token.End || token === Token.CloseGroup) return;
      if (scanner.isOnNewLine && !isStart) return;
      if (token === Token.OpenGroup) scanner.skipGroup();
      scanner.next();
      if (token === Token.Semicolon || token === Token.OpenGroup) return;
    }
  }
}

/** A text of the library as a message shows it. */
export function shortened(text: string): string {
  const line = text.split('\n', 1)[0]!;
  return line.length > MAX_SHOWN || line.length < text.length
    ? `${line.slice(0, MAX_SHOWN).trimEnd()}…`
    : text;
}

/** Where the first line after an offset begins that has `cell (` as its first words, or -1. */
function cellLine(bytes: Uint8Array, from: number): number {
  for (let line = endOfLine(bytes, from); line < bytes.length; line = endOfLine(bytes, line)) {
    do line++;
    while (isSpace(bytes[line]));
    const isCell = [...'cell'].every((char, i) => bytes[line + i] === char.charCodeAt(0));
    let at = line + 4;
    while (isSpace(bytes[at])) at++;
    if (isCell && bytes[at] === Char.LeftParen) return line;
  }
  return -1;
}
