import type { NameId, NameTable } from '../names.js';
import { Char, CharClass, charClass, isNamePart, isSpace } from './characters.js';
import { endOfBlockComment, endOfName, endOfString } from './textEnds.js';

/** A text macro (IEEE 1364-2005, clause 19.3). */
export interface Macro {
  /** The formal arguments; undefined for a macro without parentheses. */
  readonly formals: readonly NameId[] | undefined;
  /** The text, without comments to the end of a line and with line ends for `\` line ends. */
  readonly body: Uint8Array;
}

/**
 * The text of a macro that begins at an offset and goes to the end of the line, and the offset
 * after it. A backslash before a line end continues it.
 */
export function macroBody(text: Uint8Array, from: number): { body: Uint8Array; end: number } {
  const body: number[] = [];
  let at = from;
  while (at < text.length && text[at] !== Char.LineFeed) {
    const c = text[at]!;
    const next = text[at + 1];
    if (c === Char.Backslash && isLineEnd(text, at + 1)) {
      at = text.indexOf(Char.LineFeed, at) + 1;
      body.push(Char.LineFeed);
    } else if (c === Char.Slash && next === Char.Slash) {
      at = endOfLineComment(text, at);
    } else if (c === Char.Slash && next === Char.Star) {
      at = endOfComment(text, at);
      body.push(Char.Space);
    } else if (c === Char.Quote) {
      const end = endOfString(text, at);
      while (at < end) body.push(text[at++]!);
    } else {
      body.push(c);
      at++;
    }
  }
  return { body: Uint8Array.from(body), end: at };
}

/** The actual arguments of a macro's use, and the offset after its `)`. */
export interface Actuals {
  readonly texts: readonly Uint8Array[];
  readonly end: number;
}

/**
 * The arguments that follow a `(` at an offset: separated by commas outside of brackets of any
 * kind. Undefined where the text ends before the `)`.
 */
export function macroActuals(text: Uint8Array, open: number): Actuals | undefined {
  const texts: Uint8Array[] = [];
  let depth = 0;
  let start = open + 1;
  let at = start;
  while (at < text.length) {
    const c = text[at]!;
    const end = endOfOpaque(text, at);
    if (end > at) {
      at = end;
      continue;
    }
    const closes = c === Char.RightParen || c === Char.RightBracket || c === Char.RightBrace;
    if (depth === 0 && (closes || c === Char.Comma)) {
      texts.push(text.subarray(start, at));
      start = at + 1;
      if (closes) return { texts, end: start };
    } else if (closes) depth--;
    else if (c === Char.LeftParen || c === Char.LeftBracket || c === Char.LeftBrace) depth++;
    at++;
  }
  return undefined;
}

/** The end of a string, comment or escaped identifier at an offset; the offset if there is none. */
function endOfOpaque(text: Uint8Array, from: number): number {
  const c = text[from];
  if (c === Char.Quote) return endOfString(text, from);
  if (c === Char.Slash && text[from + 1] === Char.Star) return endOfComment(text, from);
  if (c === Char.Slash && text[from + 1] === Char.Slash) return endOfLineComment(text, from);
  if (c !== Char.Backslash) return from;
  let at = from;
  while (at < text.length && !isSpace(text[at])) at++;
  return at;
}

/**
 * The body of a macro with each formal argument replaced by the actual one; undefined where that
 * is longer than `most` bytes.
 */
export function substitute(
  macro: Macro,
  actuals: Actuals,
  names: NameTable,
  most: number,
): Uint8Array | undefined {
  const { body, formals = [] } = macro;
  const pieces: Uint8Array[] = [];
  let copied = 0;
  let at = 0;
  let length = body.length;
  while (at < body.length) {
    const end = endOfWord(body, at);
    const isName = charClass[body[at]!] === CharClass.Letter;
    const formal = isName ? formals.indexOf(names.intern(body, at, end)) : -1;
    if (formal >= 0) {
      length += actuals.texts[formal]!.length;
      if (length > most) return undefined;
      pieces.push(body.subarray(copied, at), actuals.texts[formal]!, after(actuals.texts[formal]!));
      copied = end;
    }
    at = end;
  }
  pieces.push(body.subarray(copied));
  return joined(pieces);
}

// An escaped identifier in an argument needs the white space that ends it.
function after(actual: Uint8Array): Uint8Array {
  return actual.includes(Char.Backslash) ? Uint8Array.of(Char.Space) : new Uint8Array(0);
}

/** The end of the word, string, escaped identifier, based number or character at an offset. */
function endOfWord(text: Uint8Array, from: number): number {
  const c = text[from]!;
  if (c === Char.Quote) return endOfString(text, from);
  let at = from + 1;
  if (c === Char.Backslash) {
    while (at < text.length && !isSpace(text[at])) at++;
  } else if (isNamePart(c) || c === Char.Apostrophe) {
    at = endOfName(text, at);
  }
  return at;
}

function joined(pieces: readonly Uint8Array[]): Uint8Array {
  const whole = new Uint8Array(pieces.reduce((sum, piece) => sum + piece.length, 0));
  let at = 0;
  for (const piece of pieces) {
    whole.set(piece, at);
    at += piece.length;
  }
  return whole;
}

/** Whether a line ends at an offset. */
export function isLineEnd(text: Uint8Array, at: number): boolean {
  return text[at] === Char.LineFeed || (text[at] === 13 && text[at + 1] === Char.LineFeed);
}

/** The offset of the line end after a `//` comment, or of the `\` that continues the line. */
function endOfLineComment(text: Uint8Array, from: number): number {
  let at = from;
  while (at < text.length && text[at] !== Char.LineFeed) {
    if (text[at] === Char.Backslash && isLineEnd(text, at + 1)) return at;
    at++;
  }
  return at;
}

function endOfComment(text: Uint8Array, from: number): number {
  const end = endOfBlockComment(text, from);
  return end < 0 ? text.length : end;
}
