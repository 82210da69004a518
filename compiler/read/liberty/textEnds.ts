import { Char, isSpace } from '../verilog/characters.js';
import { endOfBlockComment, endOfLine } from '../verilog/textEnds.js';

// Bytes that the loops below stop at; all others are passed over by one look into the table.
const stopsGroup = tableOf([Char.Quote, Char.LeftBrace, Char.RightBrace, Char.Slash]);
const stopsArguments = tableOf([Char.Quote, Char.LeftParen, Char.RightParen, Char.Slash]);
const stopsString = tableOf([Char.Quote, Char.Backslash]);

function tableOf(bytes: readonly number[]): Uint8Array {
  const table = new Uint8Array(256);
  for (const byte of bytes) table[byte] = 1;
  return table;
}

/**
 * Where the text goes on after the `}` that closes a group; `at` is after its `{`.
 *
 * Braces in strings and comments do not count. Returns -1 where the text ends first.
 */
export function endOfGroup(bytes: Uint8Array, at: number): number {
  return endOfNest(bytes, at, stopsGroup, Char.RightBrace);
}

/** Does for `(` and `)` what `endOfGroup` does for braces. */
export function endOfArguments(bytes: Uint8Array, at: number): number {
  return endOfNest(bytes, at, stopsArguments, Char.RightParen);
}

function endOfNest(bytes: Uint8Array, at: number, stops: Uint8Array, closing: number): number {
  const { length } = bytes;
  let depth = 1;
  let i = at;
  while (i < length) {
    const byte = bytes[i++]!;
    if (stops[byte] === 0) continue;
    if (byte === Char.Quote) {
      i = endOfString(bytes, i);
      if (i < 0) return -1;
    } else if (byte === Char.Slash) {
      i = endOfComment(bytes, i - 1);
      if (i < 0) return -1;
    } else if (byte !== closing) {
      depth++;
    } else if (--depth === 0) {
      return i;
    }
  }
  return -1;
}

/** Where the text goes on after a string; `at` is after its opening quote. -1 if it has no end. */
export function endOfString(bytes: Uint8Array, at: number): number {
  const { length } = bytes;
  let i = at;
  while (i < length) {
    const byte = bytes[i++]!;
    if (stopsString[byte] === 0) continue;
    if (byte === Char.Quote) return i;
    i++;
  }
  return -1;
}

/**
 * Where the text goes on after a comment that begins at `at`, the line end after `//` not
 * included. The next byte where there is none, -1 if it has no end.
 */
export function endOfComment(bytes: Uint8Array, at: number): number {
  if (!beginsComment(bytes, at)) return at + 1;
  return bytes[at + 1] === Char.Slash ? endOfLine(bytes, at) : endOfBlockComment(bytes, at);
}

/** Whether a comment begins at `at`. */
export function beginsComment(bytes: Uint8Array, at: number): boolean {
  if (bytes[at] !== Char.Slash) return false;
  return bytes[at + 1] === Char.Slash || bytes[at + 1] === Char.Star;
}

/**
 * The first line end of a string that no `\` stands before, or -1; `at` is after the opening
 * quote. Such a string is legal, and yet where a closing quote is most likely missing.
 */
export function bareLineEnd(bytes: Uint8Array, at: number): number {
  const end = endOfString(bytes, at);
  const limit = end < 0 ? bytes.length : end;
  let line = bytes.indexOf(Char.LineFeed, at);
  while (line >= 0 && line < limit && isContinued(bytes, line)) {
    line = bytes.indexOf(Char.LineFeed, line + 1);
  }
  return line < limit ? line : -1;
}

/** Where the first string begins that has a line end without `\`, or -1. */
export function firstBareString(bytes: Uint8Array): number {
  let at = 0;
  while (at >= 0 && at < bytes.length) {
    if (bytes[at] === Char.Quote) {
      if (bareLineEnd(bytes, at + 1) >= 0) return at;
      at = endOfString(bytes, at + 1);
    } else at = endOfComment(bytes, at);
  }
  return -1;
}

/** Whether a `\` stands before a line end, or before the blanks in front of it. */
function isContinued(bytes: Uint8Array, line: number): boolean {
  let i = line - 1;
  while (isSpace(bytes[i])) i--;
  return bytes[i] === Char.Backslash;
}
