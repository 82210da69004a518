import { Char } from './characters.js';
import type { Parser } from './parser.js';
import type { PlainNames } from './plainNames.js';
import { endOfSpace } from './textEnds.js';
import { Token } from './tokens.js';

// What a module imports is looked up anew at each use; these constants are not.
const { Comma } = Char;
const IDENTIFIER = Token.Identifier;

/**
 * Reads declared names from the bytes of a file, without tokens, as long as they are names alone
 * with a `,` behind them and nothing but white space between. Begins at the current token and ends at
 * the first one that is of another form, such as the last name.
 */
export function readCommonNames({ tokens }: Parser, names: PlainNames): void {
  // Tokens of a macro stand elsewhere than their text.
  if (tokens.fixedStart >= 0 || tokens.kind !== IDENTIFIER) return;
  const { text, base } = tokens;
  let start = tokens.start - base;
  let name = tokens.value;
  let end = tokens.at;
  for (;;) {
    const comma = endOfSpace(text, end);
    if (text[comma] !== Comma) break;
    names.pushPlain(name, base + start, base + end);
    start = endOfSpace(text, comma + 1);
    name = tokens.nameAt(start);
    if (name === 0) {
      tokens.goOn(comma + 1);
      return;
    }
    end = tokens.at;
  }
  tokens.kind = IDENTIFIER;
  tokens.value = name;
  tokens.at = end;
  tokens.start = base + start;
  tokens.end = base + end;
}
