import type { Position } from '../../diagnostics/sourceMap.js';
import { Char } from './characters.js';
import { decode } from './decode.js';
import { readWord } from './directiveText.js';
import type { Scanner } from './scan.js';
import { endOfBlockComment, endOfLine, endOfName, endOfString } from './textEnds.js';

/** A directive's place, for messages. */
export interface Place {
  readonly start: Position;
  readonly end: Position;
}

type Problem = (message: string, place: Place) => void;

interface Conditional {
  readonly place: Place;
  seenElse: boolean;
}

/** The `ifdef` … `endif` groups that are open in one text (clause 19.4). */
export class Conditionals {
  readonly #open: Conditional[] = [];
  readonly #isDefined: (macro: string) => boolean;
  readonly #problem: Problem;

  constructor(isDefined: (macro: string) => boolean, problem: Problem) {
    this.#isDefined = isDefined;
    this.#problem = problem;
  }

  /** After `ifdef` (or `ifndef`, with `wanted` false): goes on in the branch that holds. */
  begin(tokens: Scanner, place: Place, wanted: boolean): void {
    this.#open.push({ place, seenElse: false });
    if (this.#condition(tokens, place) !== wanted) this.#skipToBranch(tokens);
  }

  /** After `elsif` or `else` at the end of a branch that was read: skips to `endif`. */
  otherwise(tokens: Scanner, place: Place, isElse: boolean): void {
    const current = this.#open.at(-1);
    if (current === undefined) {
      this.#problem(`'\`${isElse ? 'else' : 'elsif'}' has no '\`ifdef' before it`, place);
      return;
    }
    if (isElse) this.#enterElse(current, place);
    while (this.#open.at(-1) === current) {
      const directive = nextBranch(tokens);
      if (directive === undefined) return;
      if (directive.name === 'endif') this.#open.pop();
      else if (directive.name === 'else') this.#enterElse(current, directive.place);
    }
  }

  /** After `endif`. */
  end(place: Place): void {
    if (this.#open.pop() === undefined) {
      this.#problem("'`endif' has no '`ifdef' before it", place);
    }
  }

  /** At the end of the text: reports what is still open. */
  finish(): void {
    for (const { place } of this.#open) {
      this.#problem("the conditional text has no '`endif' in its file", place);
    }
    this.#open.length = 0;
  }

  #condition(tokens: Scanner, place: Place): boolean {
    const name = readWord(tokens);
    if (name === '') this.#problem('the name of a macro is missing', place);
    return this.#isDefined(name);
  }

  #skipToBranch(tokens: Scanner): void {
    const current = this.#open.at(-1)!;
    for (;;) {
      const directive = nextBranch(tokens);
      if (directive === undefined) return;
      if (directive.name === 'endif') {
        this.#open.pop();
        return;
      }
      if (directive.name === 'else') {
        this.#enterElse(current, directive.place);
        return;
      }
      if (this.#condition(tokens, directive.place)) return;
    }
  }

  #enterElse(current: Conditional, place: Place): void {
    if (current.seenElse) this.#problem("a second '`else' in one '`ifdef'", place);
    current.seenElse = true;
  }
}

/**
 * Skips text to the next `else`, `elsif` or `endif` that belongs to no conditional inside of it,
 * and moves after that word. Undefined at the end of the text.
 */
function nextBranch(tokens: Scanner): { name: string; place: Place } | undefined {
  const { text } = tokens;
  let depth = 0;
  let at = tokens.at;
  while (at < text.length) {
    const c = text[at];
    const next = text[at + 1];
    if (c === Char.Quote) at = endOfString(text, at);
    else if (c === Char.Slash && next === Char.Star) {
      const end = endOfBlockComment(text, at);
      at = end < 0 ? text.length : end;
    } else if (c === Char.Slash && next === Char.Slash) at = endOfLine(text, at);
    else if (c !== Char.Backtick) at++;
    else {
      const start = at;
      at = endOfName(text, start + 1);
      const name = decode(text, start + 1, at);
      if (name === 'ifdef' || name === 'ifndef') depth++;
      else if (depth === 0 && (name === 'else' || name === 'elsif' || name === 'endif')) {
        tokens.at = at;
        return { name, place: { start: tokens.position(start), end: tokens.endPosition(at) } };
      } else if (name === 'endif') depth--;
    }
  }
  tokens.at = text.length;
  return undefined;
}
