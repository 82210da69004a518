import { Char, isSpace } from './characters.js';
import { decode } from './decode.js';
import { isLineEnd } from './macros.js';
import type { Scanner } from './scan.js';
import { endOfName } from './textEnds.js';

/** Reads the word that follows on the same line; empty if there is none. */
export function readWord(tokens: Scanner): string {
  tokens.skipBlank(false);
  const start = tokens.at;
  tokens.at = endOfName(tokens.text, start);
  return decode(tokens.text, start, tokens.at);
}

/** Reads what is left of the line, without the white space around it and without comments. */
export function readLine(tokens: Scanner): string {
  let line = '';
  for (;;) {
    const c = tokens.skipBlank(false);
    if (c < 0 || c === Char.LineFeed) return line;
    const start = tokens.at;
    while (tokens.at < tokens.text.length && !isSpace(tokens.text[tokens.at])) tokens.at++;
    const word = decode(tokens.text, start, tokens.at);
    line += line === '' ? word : ` ${word}`;
  }
}

/** Reads a text between `open` and `close` on the same line; undefined if there is none. */
export function readBetween(tokens: Scanner, open: number, close: number): string | undefined {
  if (tokens.skipBlank(false) !== open) return undefined;
  const { text } = tokens;
  const start = tokens.at + 1;
  let end = start;
  while (end < text.length && text[end] !== close && text[end] !== Char.LineFeed) end++;
  if (text[end] !== close) return undefined;
  tokens.at = end + 1;
  return decode(text, start, end);
}

/** Goes to the sign behind the default of a macro's argument, on the same line; returns it, or -1. */
export function skipDefault(tokens: Scanner): number {
  const ends: readonly (number | undefined)[] = [
    Char.Comma,
    Char.RightParen,
    Char.LineFeed,
    undefined,
  ];
  while (!ends.includes(tokens.text[tokens.at])) tokens.at++;
  return tokens.text[tokens.at] ?? -1;
}

/** Goes past blanks, and past ends of lines with a backslash in front; returns what comes, or -1. */
export function skipContinued(tokens: Scanner): number {
  for (;;) {
    const next = tokens.skipBlank(false);
    const { text, at } = tokens;
    if (next !== Char.Backslash || !isLineEnd(text, at + 1)) return next;
    tokens.at = text.indexOf(Char.LineFeed, at) + 1;
  }
}
