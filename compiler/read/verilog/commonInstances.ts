import { Char, CharClass, charClass } from './characters.js';
import { connectionsFrom } from './commonConnections.js';
import { END_OF_GATES, FIRST_GATE } from './keywords.js';
import type { Parser } from './parser.js';
import { endOfSpace } from './textEnds.js';
import { Token } from './tokens.js';

// What a module imports is looked up anew at each use; these constants are not.
const { LeftParen, RightParen, Semicolon } = Char;
const LETTER = CharClass.Letter;
const BACKSLASH = Char.Backslash;
const IDENTIFIER = Token.Identifier;
const classes = charClass;

/** Where `readCommonInstances` has ended; the current token is there. */
export const Common = {
  /** At the item where it began. */
  Nothing: 0,
  /** At the token behind a `;`. */
  Items: 1,
  /** Behind the `(` of an instance, none of whose connections it has read. */
  Connections: 2,
  /** Behind a `,` among the connections of an instance. */
  Connection: 3,
  /** Behind the `)` of an instance. */
  Instance: 4,
} as const;

/**
 * Reads items `cell name (…);`, `gate name (…);` and `gate (…);` from the bytes of a file, without
 * tokens, as long as they have nothing but white space between their parts and connections as
 * `readCommonConnections` knows them: nearly all of a netlist. Begins at the current token, which is
 * the word of a cell or a gate. Returns a `Common`.
 */
export function readCommonInstances(p: Parser): number {
  const { tokens, instances } = p;
  // Tokens of a macro stand elsewhere than their text.
  if (tokens.fixedStart >= 0) return Common.Nothing;
  const { text, base, kind: firstKind, value: firstValue, at: afterFirst } = tokens;
  let item = tokens.start - base;
  let kind = firstKind;
  let word = firstValue;
  let at = afterFirst;
  let count = 0;
  for (;;) {
    let open = endOfSpace(text, at);
    let name = 0;
    if (text[open] !== LeftParen) {
      name = tokens.nameAt(open);
      open = name === 0 ? -1 : endOfSpace(text, tokens.at);
    }
    if (text[open] !== LeftParen) break;
    const first = endOfSpace(text, open + 1);
    // Behind a cell or a gate without a name, a strength may stand in parentheses.
    if (!isNameStart(text, first) || (name === 0 && tokens.nameAt(first) === 0)) break;
    p.beginItem(kind === IDENTIFIER ? word : 0);
    instances.begin(kind === IDENTIFIER ? word : FIRST_GATE - 1 - kind, name, base + item);
    const end = connectionsFrom(p, first);
    if (text[end] !== RightParen) {
      tokens.goOn(end < 0 ? open + 1 : end + 1);
      return end < 0 ? Common.Connections : Common.Connection;
    }
    const semicolon = endOfSpace(text, end + 1);
    if (text[semicolon] !== Semicolon) {
      tokens.goOn(end + 1);
      return Common.Instance;
    }
    count++;
    item = endOfSpace(text, semicolon + 1);
    if (classes[text[item]!] !== LETTER) {
      tokens.goOn(semicolon + 1);
      return Common.Items;
    }
    word = tokens.nameAt(item);
    kind = tokens.kind;
    at = tokens.at;
    if (kind !== IDENTIFIER && (kind < FIRST_GATE || kind >= END_OF_GATES)) {
      tokens.goOn(semicolon + 1);
      return Common.Items;
    }
  }
  // The item that is of another form is read by tokens, from its first word on.
  if (count > 0) {
    tokens.goOn(item);
    return Common.Items;
  }
  tokens.kind = firstKind;
  tokens.value = firstValue;
  tokens.at = afterFirst;
  return Common.Nothing;
}

// Of a port's name, or of a net where the connections are given by position.
function isNameStart(text: Uint8Array, at: number): boolean {
  const first = text[at]!;
  return first === Char.Dot || first === BACKSLASH || classes[first] === LETTER;
}
