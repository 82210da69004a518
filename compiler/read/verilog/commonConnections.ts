import type { NameId } from '../names.js';
import { Char, CharClass, charClass } from './characters.js';
import { ConnectionKind, POSITIONAL } from './instances.js';
import type { Parser } from './parser.js';
import { endOfSpace } from './textEnds.js';

// What a module imports is looked up anew at each use; these constants are not.
const { Comma, Dot, LeftBracket, LeftParen, RightBracket, RightParen, Zero } = Char;
const { Bit, Name } = ConnectionKind;
const { Letter, Space } = CharClass;
const classes = charClass;

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
  const end = connectionsFrom(p, tokens.start - tokens.base);
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
export function connectionsFrom(p: Parser, start: number): number {
  const { tokens, instances } = p;
  const { text, base } = tokens;
  let at = start;
  let last = -1;
  for (;;) {
    let port = POSITIONAL;
    if (text[at] === Dot) {
      // Most instances of a cell connect its ports in the same order.
      port = instances.expectedPort;
      let end = port === POSITIONAL ? -1 : endOfGiven(p, port, at + 1);
      if (end < 0) {
        port = tokens.nameAt(at + 1);
        if (port === 0) return last;
        end = tokens.at;
      }
      at = pastSpace(text, end);
      if (text[at] !== LeftParen) return last;
      at = pastSpace(text, at + 1);
    }
    const netStart = at;
    const net = tokens.nameAt(netStart);
    if (net === 0) return last;
    at = pastSpace(text, tokens.at);
    let index = -1;
    if (text[at] === LeftBracket) {
      const first = at + 1;
      at = endOfDigits(text, first);
      if (at === first || at > first + MOST_DIGITS || text[at] !== RightBracket) return last;
      index = numberIn(text, first, at);
      at = pastSpace(text, at + 1);
    }
    if (port !== POSITIONAL) {
      if (text[at] !== RightParen) return last;
      at = pastSpace(text, at + 1);
    }
    const isLast = text[at] === RightParen;
    if (!isLast && text[at] !== Comma) return last;
    if (index < 0) instances.connect(port, Name, net, 0, base + netStart);
    else instances.connect(port, Bit, net, index, base + netStart);
    last = at;
    if (isLast) return last;
    at = pastSpace(text, at + 1);
  }
}

// There is none mostly, and a look at it is cheaper than a call.
function pastSpace(text: Uint8Array, at: number): number {
  return classes[text[at]!] === Space ? endOfSpace(text, at) : at;
}

/** The offset behind a certain name, if that stands at an offset without a backslash; else -1. */
function endOfGiven({ names, tokens }: Parser, name: NameId, start: number): number {
  const { text, reserved } = tokens;
  const end = names.texts.endOfText(name, text, start);
  if (end < 0 || classes[text[start]!] !== Letter || classes[text[end]!]! >= Letter) return -1;
  for (let at = start; at < end; at++) if (classes[text[at]!]! < Letter) return -1;
  return name < reserved.length && reserved[name] === 1 ? -1 : end;
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
