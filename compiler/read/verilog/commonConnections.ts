import { Char } from './characters.js';
import { ConnectionKind, POSITIONAL } from './instances.js';
import type { Parser } from './parser.js';
import { endOfSpace } from './textEnds.js';

// What a module imports is looked up anew at each use; these constants are not.
const { Comma, Dot, LeftBracket, LeftParen, RightBracket, RightParen, Zero } = Char;
const { Bit, Name } = ConnectionKind;

/** The parser knows how large a number may be; so many digits are never too many. */
const MOST_DIGITS = 9;

/**
 * Reads connections from the bytes of a file, without tokens, as long as they are of the forms that
 * nearly all connections of netlists have: `.port(net)` or `net`, where the net is a name or a bit
 * `name[3]`, with nothing but white space between.
 *
 * Begins at the current token. Returns false where another form begins there, with nothing read.
 * Else the current token is then the `,` or `)` behind the last connection that was read.
 */
export function readCommonConnections(p: Parser): boolean {
  const { tokens, instances } = p;
  // Tokens of a macro stand elsewhere than their text.
  if (tokens.fixedStart >= 0) return false;
  const { text, base, kind, value, at: next } = tokens;
  let at = tokens.start - base;
  let end = -1;
  for (;;) {
    let port = POSITIONAL;
    if (text[at] === Dot) {
      port = tokens.nameAt(at + 1);
      if (port === 0) break;
      at = endOfSpace(text, tokens.at);
      if (text[at] !== LeftParen) break;
      at = endOfSpace(text, at + 1);
    }
    const start = at;
    const net = tokens.nameAt(start);
    if (net === 0) break;
    at = endOfSpace(text, tokens.at);
    let index = -1;
    if (text[at] === LeftBracket) {
      const first = at + 1;
      at = endOfDigits(text, first);
      if (at === first || at > first + MOST_DIGITS || text[at] !== RightBracket) break;
      index = numberIn(text, first, at);
      at = endOfSpace(text, at + 1);
    }
    if (port !== POSITIONAL) {
      if (text[at] !== RightParen) break;
      at = endOfSpace(text, at + 1);
    }
    const isLast = text[at] === RightParen;
    if (!isLast && text[at] !== Comma) break;
    if (index < 0) instances.connect(port, Name, net, 0, base + start);
    else instances.connect(port, Bit, net, index, base + start);
    end = at;
    if (isLast) break;
    at = endOfSpace(text, at + 1);
  }
  if (end >= 0) {
    tokens.goOn(end);
    return true;
  }
  tokens.kind = kind;
  tokens.value = value;
  tokens.at = next;
  return false;
}

function endOfDigits(text: Uint8Array, from: number): number {
  let at = from;
  while (text[at]! >= Zero && text[at]! < Zero + 10) at++;
  return at;
}

function numberIn(text: Uint8Array, start: number, end: number): number {
  let value = 0;
  for (let at = start; at < end; at++) value = 10 * value + (text[at]! - Zero);
  return value;
}
