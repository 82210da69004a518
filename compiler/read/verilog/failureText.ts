import { Char, isSpace } from './characters.js';
import { decode } from './decode.js';
import { Token } from './tokens.js';

/** What is around a place where something else was expected, in the text that is being read. */
interface Around {
  readonly text: Uint8Array;
  /** Where the token before ends, and where the one that was found starts. */
  readonly before: number;
  readonly found: number;
}

/** A sign that ends or divides something: where it is missing, what comes next is not to blame. */
const isMissingSign = (expected: string): boolean => /^'(?:[;,)\]}]|or)'/.test(expected);

/** Whether something is missing at the end of a line, so that the message belongs there. */
export function belongsBefore(expected: string, { text, before, found }: Around): boolean {
  return (
    isMissingSign(expected) && before > 0 && text.subarray(before, found).includes(Char.LineFeed)
  );
}

/** `; …` about an escaped name that has swallowed the sign behind it, or nothing. */
export function escapedNameHint({ text, before }: Around): string {
  const last = text[before - 1];
  if (last !== Char.Semicolon && last !== Char.Comma && last !== Char.RightParen) return '';
  let start = before;
  while (start > 0 && !isSpace(text[start - 1])) start--;
  if (text[start] !== Char.Backslash) return '';
  const name = decode(text, start, before - 1);
  const sign = String.fromCharCode(last);
  return `; a name with a backslash goes on to the next blank: write '${name} ${sign}'`;
}

const marks: ReadonlySet<number> = new Set([
  ...[Token.ArithmeticLeft, Token.CaseEqual, Token.ArithmeticRight],
]);

/** `; …` about what a merge of versions has left in the text, or nothing. */
export function mergeMarkHint(kind: number, { text, found }: Around): string {
  const isAtStart = found === 0 || text[found - 1] === Char.LineFeed;
  const isLong = text.subarray(found, found + 7).every((byte) => byte === text[found]);
  if (!marks.has(kind) || !isAtStart || !isLong) return '';
  return '; this is what is left where two versions of a text could not be merged: choose one';
}

const typographic: ReadonlyMap<string, string> = new Map([
  ...(['‘', '’', '‚', '`', '´'] as const).map((quote): [string, string] => [quote, "'"]),
  ...(['“', '”', '„', '«', '»'] as const).map((quote): [string, string] => [quote, '"']),
  ...(['–', '—', '−'] as const).map((dash): [string, string] => [dash, '-']),
  ['×', '*'],
  ['，', ','],
  ['；', ';'],
]);

/** What to say of characters that are no part of any token. */
export function strayText(stray: string): string {
  const plain = typographic.get(stray);
  if (plain !== undefined) return `'${stray}' has no meaning here; write ${plain} instead`;
  return `${shown(stray)} has no meaning here; remove it`;
}

// What cannot be seen is told by its number.
function shown(stray: string): string {
  if (/^[\p{L}\p{M}\p{N}\p{P}\p{S}]+$/u.test(stray)) return `'${stray}'`;
  const [first] = stray;
  const code = first!.codePointAt(0)!.toString(16).toUpperCase().padStart(4, '0');
  return stray.length === first!.length
    ? `the character U+${code}`
    : `the text that begins with the character U+${code}`;
}
