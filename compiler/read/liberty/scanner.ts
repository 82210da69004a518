import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameTable } from '../names.js';
import { Char, isSpace } from '../verilog/characters.js';
import {
  bareLineEnd,
  beginsComment,
  endOfArguments,
  endOfComment,
  endOfGroup,
  endOfString,
} from './textEnds.js';

/** What `Scanner.next` has found; punctuation characters stand for themselves. */
export const Token = {
  End: 0,
  Word: 1,
  String: 2,
  OpenArguments: Char.LeftParen,
  CloseArguments: Char.RightParen,
  Comma: Char.Comma,
  Colon: Char.Colon,
  Semicolon: Char.Semicolon,
  OpenGroup: Char.LeftBrace,
  CloseGroup: Char.RightBrace,
} as const;

// Bytes that end a word.
const endsWord = new Uint8Array(256);
for (const char of '(){},;:"') endsWord[char.charCodeAt(0)] = 1;
for (let byte = 0; byte < 256; byte++) if (isSpace(byte)) endsWord[byte] = 1;

/**
 * Splits one Liberty text into words, strings and punctuation, as the parser asks for them.
 *
 * A word is any run of visible bytes without punctuation; a `:` inside brackets belongs to it, as
 * in `A[3:0]`. A `\` before a line end joins the two lines.
 */
export class Scanner {
  readonly bytes: Uint8Array;
  /** Position of the first byte in the source map. */
  readonly base: Position;
  /** A `Token`. */
  token: number = Token.End;
  /** Where the token begins and ends, in bytes; the quotes of a string are part of it. */
  start = 0;
  end = 0;
  /** Position after the token before. */
  previousEnd: Position;
  /** Whether a line ended between the token before and this one. */
  isOnNewLine = false;
  /** Where the string or comment begins that the text ends within; -1 for none. */
  openEnd = -1;
  readonly #names: NameTable;
  #isCut = false;

  constructor(bytes: Uint8Array, base: Position, names: NameTable) {
    this.bytes = bytes;
    this.base = base;
    this.previousEnd = base;
    this.#names = names;
    // A byte order mark is no part of the text.
    if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) this.end = 3;
  }

  /** Position of the token in the source map. */
  get position(): Position {
    return this.base + this.start;
  }

  /** Position after the token. */
  get endPosition(): Position {
    return this.base + this.end;
  }

  /** Goes to the next token. */
  next(): void {
    const { bytes } = this;
    this.previousEnd = this.base + this.end;
    const at = this.#skipBlank(this.end);
    this.start = at;
    this.#isCut = false;
    if (at === bytes.length) {
      this.token = Token.End;
      this.end = at;
      return;
    }
    const byte = bytes[at]!;
    if (byte === Char.Quote) {
      const end = endOfString(bytes, at + 1);
      if (end < 0) this.openEnd = at;
      this.token = Token.String;
      this.end = end < 0 ? bytes.length : end;
    } else if (endsWord[byte] === 1) {
      this.token = byte;
      this.end = at + 1;
    } else {
      this.token = Token.Word;
      this.end = this.#endOfWord(at);
    }
  }

  /** Makes `offset` the place where the next token is looked for. */
  goTo(offset: number): void {
    this.end = offset;
  }

  /** Passes over a group whose `{` is the token; false where the text ends before its `}`. */
  skipGroup(): boolean {
    return this.#goAfter(endOfGroup(this.bytes, this.end));
  }

  /** Passes over arguments whose `(` is the token; false where the text ends before the `)`. */
  skipArguments(): boolean {
    return this.#goAfter(endOfArguments(this.bytes, this.end));
  }

  /** Ends a string token at its first line end without `\`; whether there is one. */
  cutString(): boolean {
    const end = this.token === Token.String ? bareLineEnd(this.bytes, this.start + 1) : -1;
    if (end < 0) return false;
    this.end = end;
    this.#isCut = true;
    this.openEnd = -1;
    return true;
  }

  /** The text of the token, without the quotes of a string. One object for each distinct text. */
  text(): string {
    return this.slice(this.contentStart, this.contentEnd);
  }

  /** Where the text of the token begins and ends, in bytes; quotes are no part of it. */
  get contentStart(): number {
    return this.token === Token.String ? this.start + 1 : this.start;
  }

  get contentEnd(): number {
    const hasQuote = this.token === Token.String && !this.#isCut && this.openEnd !== this.start;
    return hasQuote ? this.end - 1 : this.end;
  }

  /** A stretch of the text. One object for each distinct text. */
  slice(start: number, end: number): string {
    return this.#names.text(this.#names.intern(this.bytes, start, end));
  }

  #goAfter(end: number): boolean {
    this.end = end < 0 ? this.bytes.length : end;
    return end >= 0;
  }

  #skipBlank(from: number): number {
    const { bytes } = this;
    this.isOnNewLine = false;
    let at = from;
    while (at < bytes.length) {
      const byte = bytes[at]!;
      if (byte === Char.LineFeed) this.isOnNewLine = true;
      if (beginsComment(bytes, at)) {
        const end = endOfComment(bytes, at);
        if (end < 0) this.openEnd = at;
        at = end < 0 ? bytes.length : end;
      } else if (byte === Char.Backslash) {
        const end = this.#endOfContinuation(at);
        if (end < 0) break;
        at = end;
      } else if (isSpace(byte)) at++;
      else break;
    }
    return at;
  }

  /** Where the line after a `\` begins, or -1 where more than blanks stands between. */
  #endOfContinuation(at: number): number {
    const { bytes } = this;
    for (let i = at + 1; i < bytes.length; i++) {
      if (bytes[i] === Char.LineFeed) return i + 1;
      if (!isSpace(bytes[i])) return -1;
    }
    return bytes.length;
  }

  #endOfWord(from: number): number {
    const { bytes } = this;
    let isInBrackets = false;
    let at = from;
    for (; at < bytes.length; at++) {
      const byte = bytes[at]!;
      if (byte === Char.LeftBracket) isInBrackets = true;
      else if (byte === Char.RightBracket) isInBrackets = false;
      else if (endsWord[byte] === 1 && !(isInBrackets && byte === Char.Colon)) break;
      else if (beginsComment(bytes, at)) break;
      else if (byte === Char.Backslash && at > from && this.#endOfContinuation(at) >= 0) break;
    }
    return at;
  }
}
