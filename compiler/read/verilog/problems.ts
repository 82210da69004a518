import { codeTable, type DiagnosticCode } from '../../diagnostics/codes.js';
import type { Diagnostics } from '../../diagnostics/diagnostics.js';
import type { Position, SourceMap } from '../../diagnostics/sourceMap.js';

/** Problems reported before the rest of the text is given up. */
export const MAX_PROBLEMS = 100;

/** Turns the positions of a reader into spans, and stops after `MAX_PROBLEMS`. */
export class Problems {
  readonly #sourceMap: SourceMap;
  readonly #diagnostics: Diagnostics;
  #count = 0;
  #isOver = false;

  constructor(sourceMap: SourceMap, diagnostics: Diagnostics) {
    this.#sourceMap = sourceMap;
    this.#diagnostics = diagnostics;
  }

  /** Whether so much is wrong that reading on tells nothing new: nothing more is reported. */
  get areTooMany(): boolean {
    return this.#isOver;
  }

  /** Reports nothing from now on. */
  giveUp(): void {
    this.#isOver = true;
  }

  /** Adds a diagnostic about the text between two positions. */
  add(code: DiagnosticCode, message: string, start: Position, end: Position): void {
    if (this.#isOver) return;
    const span = this.#sourceMap.span(start, end);
    if (codeTable[code].severity === 'error' && ++this.#count > MAX_PROBLEMS) {
      this.#diagnostics.add('syntax-error', 'too many problems; the rest is not read', span);
      this.giveUp();
    } else this.#diagnostics.add(code, message, span);
  }
}
