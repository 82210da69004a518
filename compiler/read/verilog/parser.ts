import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../names.js';
import { belongsBefore, escapedNameHint, mergeMarkHint } from './failureText.js';
import { InstanceTable } from './instances.js';
import { Keyword, keywords, wordsLikeNames } from './keywords.js';
import { laterSignHint, laterWordHint } from './laterStandard.js';
import type { Preprocessor } from './preprocess.js';
import type { Problems } from './problems.js';
import type { Scanner } from './scan.js';
import { Token, tokenTexts } from './tokens.js';

/** How deep statements, expressions and generate blocks may nest in each other. */
export const MAX_DEPTH = 500;

const parenthesisStops: ReadonlySet<number> = new Set([
  ...[Token.RightParen, Keyword.begin, Keyword.end, Keyword.endmodule, Keyword.module],
]);

/** Thrown from inside an item whose problem has been reported, and caught where reading goes on. */
export class SyntaxFailure extends Error {}

/** What all parsing functions share: the tokens, and the ways to expect and to complain. */
export class Parser {
  readonly tokens: Scanner;
  readonly names: NameTable;
  readonly preprocessor: Preprocessor;
  readonly problems: Problems;
  /** Instances of the module being read. */
  instances = new InstanceTable();
  /** The name that the item or statement being read begins with; 0 for none. */
  #firstWord: NameId = 0;
  /** The name that was expected and found last; 0 for none. */
  #lastName: NameId = 0;
  #lastFailure: Position = -1;
  #depth = 0;

  constructor(preprocessor: Preprocessor, names: NameTable, problems: Problems) {
    this.preprocessor = preprocessor;
    this.tokens = preprocessor.tokens;
    this.names = names;
    this.problems = problems;
  }

  /** Whether the current token is of a kind. */
  is(kind: number): boolean {
    return this.tokens.kind === kind;
  }

  /** Goes past the current token if it is of a kind; tells whether it was. */
  accept(kind: number): boolean {
    if (this.tokens.kind !== kind) return false;
    this.tokens.next();
    return true;
  }

  /** Goes past a token of a kind, or fails; `what` overrides the kind's own text. */
  expect(kind: number, what?: string): void {
    if (this.tokens.kind !== kind) this.fail(what ?? textOf(kind));
    this.tokens.next();
  }

  /** Goes past an identifier and returns its name, or fails. */
  expectName(what: string): NameId {
    if (this.tokens.kind !== Token.Identifier) this.fail(what);
    const name = this.tokens.value;
    this.#lastName = name;
    this.tokens.next();
    return name;
  }

  /** Reports that something else was expected at the current token, and gives up the item. */
  fail(expected: string): never {
    const { start } = this.tokens;
    // What is around a construct that failed may fail at the same place once more.
    if (start !== this.#lastFailure && !this.#followsUndefinedMacro()) {
      this.#reportFailure(expected);
    }
    this.#lastFailure = start;
    throw new SyntaxFailure();
  }

  #reportFailure(expected: string): void {
    const { start, end, lastEnd, text, base, fixedStart } = this.tokens;
    // The token before may stand in another file, or in a macro.
    const isNear = fixedStart < 0 && lastEnd >= base && lastEnd <= start;
    const around = { text, before: isNear ? lastEnd - base : 0, found: start - base };
    const isBefore = belongsBefore(expected, around);
    const found = `${this.found()}${isBefore ? ' on a later line' : ''}`;
    const message = `expected ${expected}, found ${found}${this.#hint(expected, around)}`;
    const place = isBefore ? { start: lastEnd, end: lastEnd } : { start, end };
    this.problems.add('syntax-error', message, place.start, place.end);
  }

  /** Reports a problem at a place, and gives up the item. */
  failAt(message: string, start: Position, end: Position): never {
    this.problems.add('syntax-error', message, start, end);
    throw new SyntaxFailure();
  }

  /** The current token as messages name it. */
  found(): string {
    const { tokens } = this;
    if (tokens.kind === Token.Identifier || tokens.kind === Token.SystemName) {
      return `'${this.names.text(tokens.value)}'`;
    }
    if (tokens.kind === Token.Symbol) return `'${String.fromCharCode(tokens.value)}'`;
    return textOf(tokens.kind);
  }

  /** Begins a construct that may nest in itself; `leave` ends it. Too deep ends the reading. */
  enter(): void {
    if (++this.#depth <= MAX_DEPTH) return;
    const { start, end } = this.tokens;
    const message = `nested more than ${MAX_DEPTH} levels deep; divide it`;
    this.problems.add('syntax-error', message, start, end);
    // Reading on in the midst of all the levels would find a fault at the end of each.
    this.problems.giveUp();
    throw new SyntaxFailure();
  }

  /** Ends what `enter` began. */
  leave(): void {
    this.#depth--;
  }

  /** Forgets the words that explained a problem of the item before. */
  beginItem(firstWord: NameId): void {
    this.#firstWord = firstWord;
    this.#lastName = 0;
  }

  /**
   * Carries out `read`. If it fails, skips to one of the kinds in `stops`, past the next `;` if
   * `isStatement`, or to the end of the input, and returns undefined.
   */
  attempt<T>(read: () => T, stops: ReadonlySet<number>, isStatement = true): T | undefined {
    const depth = this.#depth;
    try {
      return read();
    } catch (failure) {
      if (!(failure instanceof SyntaxFailure)) throw failure;
      this.#depth = depth;
      this.#skip(stops, isStatement);
      return undefined;
    }
  }

  /**
   * Carries out `read` between `(` and `)`, where a `;` ends no statement. If it fails, goes on after
   * the `)` and returns undefined, or gives up the item where there is none.
   */
  inParentheses<T>(read: () => T): T | undefined {
    this.expect(Token.LeftParen);
    const result = this.attempt(
      () => {
        const inner = read();
        if (!this.is(Token.RightParen)) this.fail("')'");
        return inner;
      },
      parenthesisStops,
      false,
    );
    if (!this.accept(Token.RightParen)) throw new SyntaxFailure();
    return result;
  }

  #skip(stops: ReadonlySet<number>, isStatement: boolean): void {
    const { tokens } = this;
    while (tokens.kind !== Token.EndOfInput && !stops.has(tokens.kind)) {
      if (this.problems.areTooMany) return;
      const isEnd = isStatement && tokens.kind === Token.Semicolon;
      tokens.next();
      // The `else` of the statement that is skipped.
      if (isEnd && tokens.kind !== Keyword.else) return;
    }
  }

  #followsUndefinedMacro(): boolean {
    const { undefinedAt } = this.preprocessor;
    return undefinedAt >= this.tokens.lastEnd && undefinedAt <= this.tokens.start;
  }

  #hint(expected: string, around: Parameters<typeof escapedNameHint>[0]): string {
    const { kind, value } = this.tokens;
    const hint = mergeMarkHint(kind, around) || escapedNameHint(around);
    if (hint !== '') return hint;
    const reserved = keywords[kind - Token.FirstKeyword];
    if (reserved !== undefined && wordsLikeNames.has(reserved)) {
      return `; as a name, a reserved word is written with a backslash and a space: \\${reserved} `;
    }
    const ids = [this.#firstWord, this.#lastName, kind === Token.Identifier ? value : 0];
    const hints = ids.map((id) => laterWordHint(this.names.text(id)));
    return hints.find((text) => text !== '') ?? laterSignHint(kind, expected, around);
  }
}

function textOf(kind: number): string {
  if (kind < Token.FirstKeyword) return tokenTexts[kind]!;
  return `'${keywords[kind - Token.FirstKeyword]}'`;
}
