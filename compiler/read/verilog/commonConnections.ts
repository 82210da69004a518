import { Char } from './characters.js';
import { ConnectionKind, type InstanceTable, POSITIONAL } from './instances.js';
import type { Parser } from './parser.js';
import type { Scanner } from './scan.js';
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
  const { tokens } = p;
  // Tokens of a macro stand elsewhere than their text.
  if (tokens.fixedStart >= 0) return false;
  const { kind, value, at: next } = tokens;
  const end = connectionsFrom(tokens, p.instances, tokens.start - tokens.base);
  if (end >= 0) {
    tokens.goOn(end);
    return true;
  }
  tokens.kind = kind;
  tokens.value = value;
  tokens.at = next;
  return false;
}

/**
 * Does so from an offset in the text on. Returns the offset of the `,` or `)` behind the last
 * connection that was read, or -1 for none; the current token has no meaning then.
 */
export function connectionsFrom(tokens: Scanner, instances: InstanceTable, start: number): number {
  const { text, base } = tokens;
  let at = start;
  let end = -1;
  for (;;) {
    let port = POSITIONAL;
    if (text[at] === Dot) {
      port = tokens.nameAt(at + 1);
      if (port === 0) return end;
      at = endOfSpace(text, tokens.at);
      if (text[at] !== LeftParen) return end;
      at = endOfSpace(text, at + 1);
    }
    const netStart = at;
    const net = tokens.nameAt(netStart);
    if (net === 0) return end;
    at = endOfSpace(text, tokens.at);
    let index = -1;
    if (text[at] === LeftBracket) {
      const first = at + 1;
      at = endOfDigits(text, first);
      if (at === first || at > first + MOST_DIGITS || text[at] !== RightBracket) return end;
      index = numberIn(text, first, at);
      at = endOfSpace(text, at + 1);
    }
    if (port !== POSITIONAL) {
      if (text[at] !== RightParen) return end;
      at = endOfSpace(text, at + 1);
    }
    const isLast = text[at] === RightParen;
    if (!isLast && text[at] !== Comma) return end;
    if (index < 0) instances.connect(port, Name, net, 0, base + netStart);
    else instances.connect(port, Bit, net, index, base + netStart);
    end = at;
    if (isLast) return end;
    at = endOfSpace(text, at + 1);
  }
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
