import type { Position } from '../../diagnostics/sourceMap.js';
import { EMPTY_HASH, hashMultipliers, type NameId, type NameTable } from '../names.js';
import { Char, CharClass, charClass, isNamePart, isSpace } from './characters.js';
import { decode } from './decode.js';
import { strayText } from './failureText.js';
import { currentVersion, reservedWords } from './keywords.js';
import { laterQuote } from './laterStandard.js';
import { baseOfLetter, SIGNED_BASE } from './numbers.js';
import { scanOperator, singleTokens } from './operators.js';
import type { ScannerClient } from './scannerClient.js';
import {
  endOfAttribute,
  endOfBlockComment,
  endOfLine,
  endOfName,
  endOfReal,
  endOfSpace,
  endOfStringText,
} from './textEnds.js';
import { Token } from './tokens.js';

// What a module imports is looked up anew at each use, and these are used for every token.
const SPACE = Char.Space;
const BLANK = CharClass.Space;
const SLASH = Char.Slash;
const LEFT_PAREN = Char.LeftParen;
const STAR = Char.Star;
const IDENTIFIER = Token.Identifier;
const FIRST_WORD = Token.FirstKeyword - 1;
const singles = singleTokens;
const classes = charClass;
const multipliers = hashMultipliers;
const LETTER = CharClass.Letter;
const BACKSLASH = Char.Backslash;

/**
 * Tokens of Verilog (IEEE 1364-2005, clause 3) from bytes.
 *
 * The current token is in the fields, so that no object is made for it. White space, comments and
 * attributes are skipped; directives are left to the client.
 */
export class Scanner {
  /** A `Token` or `Keyword`. */
  kind: number = Token.EndOfInput;
  /**
   * Of an identifier or system name: its NameId (without the backslash of an escaped one). Of a
   * Number: its value, or -1 from 2^31 on. Of a Based: the base, plus `SIGNED_BASE` if signed. Of
   * a Symbol: its character code.
   */
  value = 0;
  /** Where the token starts and ends; of one that a macro yields, where the macro is used. */
  start: Position = 0;
  end: Position = 0;
  /** Where the token before this one ends. */
  lastEnd: Position = 0;
  /** Digits of a number or inside of a string, in `text`, until the next token is read. */
  textStart = 0;
  textEnd = 0;

  /** The text being read, and the offset of what follows the current token. */
  text: Uint8Array = new Uint8Array(0);
  at = 0;
  /** Position of the text's first byte. */
  base: Position = 0;
  /** Start and end of all tokens of a macro's text; -1 in a file. */
  fixedStart: Position = -1;
  fixedEnd: Position = -1;

  /** Which names are keywords: see `reservedWords`. */
  reserved: Uint8Array = reservedWords(currentVersion)!;

  readonly #names: NameTable;
  readonly #client: ScannerClient;
  #caseAttributes: string[] = [];
  /** A text whose rest has no `*)`: it is not searched for each of many a `(*`. */
  #withoutAttributeEnd: Uint8Array | undefined;

  constructor(names: NameTable, client: ScannerClient) {
    this.#names = names;
    this.#client = client;
  }

  /** Reads the next token. At the end of the input it stays at `EndOfInput`. */
  next(): void {
    this.lastEnd = this.end;
    if (this.#scanCommon()) return;
    do this.#scan();
    while (this.kind === Token.Nothing);
    this.end = this.fixedStart < 0 ? this.base + this.at : this.fixedEnd;
  }

  /**
   * Reads the name that begins at an offset of a file, without a token of its own; `at` is then
   * behind it, from where `goOn` reads tokens again. Returns 0 where none or a keyword is there.
   */
  nameAt(start: number): NameId {
    const text = this.text;
    const first = text[start]!;
    if (classes[first] === LETTER) this.#identifier(start);
    else if (first === BACKSLASH && (text[start + 1] ?? 0) > SPACE) this.#escaped(start);
    else return 0;
    return this.kind === IDENTIFIER ? this.value : 0;
  }

  /** Reads the next token from an offset on. */
  goOn(offset: number): void {
    this.at = offset;
    this.end = this.base + offset;
    this.next();
  }

  /** Reads a name or a sign in a file, after one blank at most: nearly all tokens of a netlist. */
  #scanCommon(): boolean {
    const text = this.text;
    let at = this.at;
    if (at + 2 >= text.length || this.fixedStart >= 0) return false;
    if (text[at] === SPACE) at++;
    const first = text[at]!;
    const single = singles[first]!;
    if (single !== 0) {
      // A comment or an attribute may begin here.
      if (first === SLASH) return false;
      if (first === LEFT_PAREN && text[at + 1] === STAR) return false;
      this.kind = single;
      this.at = at + 1;
    } else if (classes[first] === LETTER) this.#identifier(at);
    else return false;
    this.start = this.base + at;
    this.end = this.base + this.at;
    return true;
  }

  #scan(): void {
    const first = this.#skip();
    const start = this.at;
    this.start = this.fixedStart < 0 ? this.base + start : this.fixedStart;
    if (first < 0) {
      this.kind = Token.EndOfInput;
      return;
    }
    const single = singleTokens[first]!;
    if (single !== 0) {
      this.kind = single;
      this.at = start + 1;
    } else if (charClass[first] === CharClass.Letter) {
      this.#identifier(start);
    } else if (charClass[first] === CharClass.Digit) {
      this.#number(start);
    } else {
      this.#other(first, start);
    }
  }

  /**
   * Reads the next token inside the table of a primitive: a `Symbol` for any character but a
   * letter that begins `endtable`.
   */
  nextSymbol(): void {
    this.lastEnd = this.end;
    const first = this.#skip(false);
    this.start = this.position(this.at);
    if (first < 0) this.kind = Token.EndOfInput;
    else if (first === Char.LowerE) this.#identifier(this.at);
    else {
      this.kind = Token.Symbol;
      this.value = first;
      this.at++;
    }
    this.end = this.fixedStart < 0 ? this.base + this.at : this.fixedEnd;
  }

  /** The position of an offset in the current text. */
  position(offset: number): Position {
    return this.fixedStart < 0 ? this.base + offset : this.fixedStart;
  }

  /** The position of an end at an offset. */
  endPosition(offset: number): Position {
    return this.fixedStart < 0 ? this.base + offset : this.fixedEnd;
  }

  /** The case attributes skipped since the last call: `full_case`, `parallel_case`. */
  takeCaseAttributes(): readonly string[] {
    const attributes = this.#caseAttributes;
    if (attributes.length > 0) this.#caseAttributes = [];
    return attributes;
  }

  /** Goes past white space and comments, over line ends only if asked; returns the byte there. */
  skipBlank(overLines: boolean): number {
    const text = this.text;
    for (;;) {
      const c = text[this.at];
      if (c === undefined) return -1;
      if (c === Char.Slash && this.#skipComment()) continue;
      if (!isSpace(c) || (c === Char.LineFeed && !overLines)) return c;
      this.at++;
    }
  }

  /** Moves to the first byte that is no white space, comment or attribute; -1 at the end. */
  #skip(withAttributes = true): number {
    for (;;) {
      this.at = endOfSpace(this.text, this.at);
      const c = this.text[this.at];
      if (c === undefined) {
        if (!this.#client.endOfText()) return -1;
      } else if (c === Char.Backtick) {
        this.#client.directive();
      } else if (c === Char.Slash) {
        if (!this.#skipComment()) return c;
      } else if (c !== Char.LeftParen || !withAttributes || !this.#skipAttribute()) {
        return c;
      }
    }
  }

  #skipComment(): boolean {
    const text = this.text;
    const start = this.at;
    if (text[start + 1] === Char.Slash) {
      this.at = endOfLine(text, start);
      return true;
    }
    if (text[start + 1] !== Char.Star) return false;
    const end = endOfBlockComment(text, start);
    if (end < 0) this.#problem("the comment has no end '*/'", start, start + 2);
    this.at = end < 0 ? text.length : end;
    return true;
  }

  #skipAttribute(): boolean {
    const text = this.text;
    const start = this.at;
    if (text[start + 1] !== Char.Star || text === this.#withoutAttributeEnd) return false;
    const at = endOfSpace(text, start + 2);
    // `(*)` after an @ is an event list.
    if (text[at] === Char.RightParen) return false;
    const end = endOfAttribute(text, at);
    if (end < 0) {
      this.#withoutAttributeEnd = text;
      this.#problem("the attribute has no end '*)'", start, start + 2);
      return false;
    }
    if (text.subarray(start, end).includes(Char.Underscore))
      this.#noteAttribute(decode(text, start, end));
    this.at = end;
    return true;
  }

  #noteAttribute(content: string): void {
    for (const name of ['full_case', 'parallel_case']) {
      const known = this.#caseAttributes.includes(name);
      if (!known && content.includes(name)) this.#caseAttributes.push(name);
    }
  }

  #identifier(start: number): void {
    const text = this.text;
    const limit = text.length;
    const kinds = classes;
    const factors = multipliers;
    let at = start;
    let hash = EMPTY_HASH;
    while (at < limit) {
      const c = text[at]!;
      if (kinds[c]! < LETTER) break;
      hash = (Math.imul(hash, factors[c]!) + c) | 0;
      at++;
    }
    this.at = at;
    const id = this.#names.internHashed(text, start, at, hash);
    this.value = id;
    this.kind = id < this.reserved.length && this.reserved[id] === 1 ? FIRST_WORD + id : IDENTIFIER;
  }

  #number(start: number): void {
    const text = this.text;
    let at = start;
    let value = 0;
    let c = text[at];
    while (c !== undefined && (charClass[c] === CharClass.Digit || c === Char.Underscore)) {
      if (c !== Char.Underscore) value = value < 0x80000000 ? value * 10 + (c - Char.Zero) : value;
      c = text[++at];
    }
    this.kind = Token.Number;
    this.value = value < 0x80000000 ? value : -1;
    if (c === Char.Dot || c === Char.LowerE || c === Char.UpperE) {
      const end = endOfReal(text, at);
      if (end > at) {
        this.kind = Token.Real;
        at = end;
      }
    }
    this.textStart = start;
    this.textEnd = at;
    this.at = at;
  }

  #other(first: number, start: number): void {
    this.at = start + 1;
    switch (first) {
      case Char.Backslash:
        this.#escaped(start);
        return;
      case Char.Quote:
        this.#string(start);
        return;
      case Char.Apostrophe:
        this.#based(start);
        return;
      case Char.Dollar:
        if (!isNamePart(this.text[this.at])) break;
        this.at = endOfName(this.text, this.at);
        this.kind = Token.SystemName;
        this.value = this.#names.intern(this.text, start, this.at);
        return;
    }
    if (scanOperator(this, first)) return;
    // A stretch of stray bytes, such as letters beyond ASCII, gives one message.
    while (this.text[this.at]! > 127) this.at++;
    const stray = decode(this.text, start, this.at);
    this.#problem(strayText(stray), start, this.at);
    this.kind = Token.Nothing;
  }

  #escaped(start: number): void {
    const text = this.text;
    const limit = text.length;
    const kinds = classes;
    const factors = multipliers;
    let at = start + 1;
    let hash = EMPTY_HASH;
    while (at < limit) {
      const c = text[at]!;
      if (kinds[c] === BLANK) break;
      hash = (Math.imul(hash, factors[c]!) + c) | 0;
      at++;
    }
    this.at = at;
    if (at === start + 1) {
      this.#problem("a name is missing after '\\'", start, at);
      this.kind = Token.Nothing;
      return;
    }
    this.kind = Token.Identifier;
    this.value = this.#names.internHashed(text, start + 1, at, hash);
  }

  #string(start: number): void {
    const end = endOfStringText(this.text, start);
    const isWhole = this.text[end] === Char.Quote;
    this.kind = Token.String;
    this.textStart = start + 1;
    this.textEnd = end;
    this.at = isWhole ? end + 1 : end;
    if (!isWhole) this.#problem("the string has no end '\"' on its line", start, end);
  }

  /** `'` { `s` } base digits. White space, or the use of a macro, may come before the digits. */
  #based(start: number): void {
    let value = 0;
    let letter = this.text[this.at];
    if (letter === Char.LowerS || letter === Char.UpperS) {
      value = SIGNED_BASE;
      letter = this.text[++this.at];
    }
    const base = baseOfLetter(letter);
    if (base === 0) {
      this.at = start + 1;
      const later = laterQuote(String.fromCharCode(letter ?? 0));
      const plain = "after ' a base b, o, d or h and digits are expected, such as in 4'b0101";
      this.#problem(later ?? plain, start, this.at);
      this.kind = Token.Nothing;
      return;
    }
    this.at++;
    const startPosition = this.start;
    const first = this.#skip();
    this.start = startPosition;
    this.kind = Token.Based;
    this.value = value + base;
    this.textStart = this.at;
    if (first === Char.Question || isNamePart(first)) {
      while (isNamePart(this.text[this.at]) || this.text[this.at] === Char.Question) this.at++;
    }
    this.textEnd = this.at;
  }

  #problem(message: string, start: number, end: number): void {
    const endPosition = this.fixedStart < 0 ? this.base + end : this.fixedEnd;
    this.#client.problem(message, this.position(start), endPosition);
  }
}
