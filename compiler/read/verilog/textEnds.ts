import { Char, CharClass, charClass, isNamePart } from './characters.js';

// What a module imports is looked up anew at each use.
const classes = charClass;
const SPACE = CharClass.Space;

/** The offset after the name characters from an offset on. */
export function endOfName(text: Uint8Array, from: number): number {
  let at = from;
  while (isNamePart(text[at])) at++;
  return at;
}

/** The offset after the white space from an offset on. */
export function endOfSpace(text: Uint8Array, from: number): number {
  const limit = text.length;
  let at = from;
  while (at < limit && classes[text[at]!] === SPACE) at++;
  return at;
}

/** The offset of the next line end, or the text's end. */
export function endOfLine(text: Uint8Array, from: number): number {
  const end = text.indexOf(Char.LineFeed, from);
  return end < 0 ? text.length : end;
}

/** The offset after the end of a block comment that begins at an offset; -1 if it has none. */
export function endOfBlockComment(text: Uint8Array, from: number): number {
  let end = text.indexOf(Char.Slash, from + 3);
  while (end >= 0 && text[end - 1] !== Char.Star) end = text.indexOf(Char.Slash, end + 1);
  return end < 0 ? -1 : end + 1;
}

/** The offset of the quote that ends a string begun at an offset, or of the line or text end. */
export function endOfStringText(text: Uint8Array, from: number): number {
  let at = from + 1;
  while (at < text.length && text[at] !== Char.Quote && text[at] !== Char.LineFeed) {
    at += text[at] === Char.Backslash ? 2 : 1;
  }
  return Math.min(at, text.length);
}

/** The offset after a string that begins at an offset; it ends at the line end at the latest. */
export function endOfString(text: Uint8Array, from: number): number {
  const end = endOfStringText(text, from);
  return text[end] === Char.Quote ? end + 1 : end;
}

/** The offset after the `*)` of an attribute, from an offset inside of it; -1 if it has none. */
export function endOfAttribute(text: Uint8Array, from: number): number {
  let at = from;
  while (at < text.length) {
    const c = text[at]!;
    if (c === Char.Quote) at = endOfString(text, at);
    else if (c === Char.Star && text[at + 1] === Char.RightParen) return at + 2;
    else at++;
  }
  return -1;
}

/** The end of a fraction and exponent that begin at an offset, or the offset if none does. */
export function endOfReal(text: Uint8Array, from: number): number {
  let at = from;
  if (text[at] === Char.Dot) {
    at = endOfDigits(text, from + 1);
    if (at === from + 1) return from;
  }
  if (text[at] === Char.LowerE || text[at] === Char.UpperE) {
    const next = text[at + 1];
    const digits = at + (next === Char.Plus || next === Char.Minus ? 2 : 1);
    const end = endOfDigits(text, digits);
    if (end > digits) return end;
  }
  return at;
}

function endOfDigits(text: Uint8Array, from: number): number {
  let at = from;
  while (text[at] === Char.Underscore || charClass[text[at] ?? 0] === CharClass.Digit) at++;
  return at;
}
