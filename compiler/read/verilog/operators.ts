import { Char } from './characters.js';
import { Token } from './tokens.js';

/** The token of each character that is one whatever follows it; 0 for all others. */
export const singleTokens = singles();

function singles(): Uint8Array {
  const table = new Uint8Array(256);
  table[Char.LeftParen] = Token.LeftParen;
  table[Char.RightParen] = Token.RightParen;
  table[Char.LeftBracket] = Token.LeftBracket;
  table[Char.RightBracket] = Token.RightBracket;
  table[Char.LeftBrace] = Token.LeftBrace;
  table[Char.RightBrace] = Token.RightBrace;
  table[Char.Comma] = Token.Comma;
  table[Char.Semicolon] = Token.Semicolon;
  table[Char.Colon] = Token.Colon;
  table[Char.Dot] = Token.Dot;
  table[Char.Hash] = Token.Hash;
  table[Char.At] = Token.At;
  table[Char.Question] = Token.Question;
  table[Char.Percent] = Token.Percent;
  table[Char.Slash] = Token.Slash;
  return table;
}

// Per first character: the operators that begin with it, the longest first.
const operators: ReadonlyMap<number, readonly (readonly [string, number])[]> = new Map([
  [Char.Equals, [['===', Token.CaseEqual] as const, ['==', Token.Equal], ['=', Token.Equals]]],
  [
    Char.Exclamation,
    [
      ['!==', Token.CaseNotEqual],
      ['!=', Token.NotEqual],
      ['!', Token.Not],
    ],
  ],
  [
    Char.Ampersand,
    [
      ['&&', Token.AndAnd],
      ['&', Token.And],
    ],
  ],
  [
    Char.Bar,
    [
      ['||', Token.OrOr],
      ['|', Token.Or],
    ],
  ],
  [
    Char.Tilde,
    [
      ['~&', Token.Nand],
      ['~|', Token.Nor],
      ['~^', Token.Xnor],
      ['~', Token.Tilde],
    ],
  ],
  [
    Char.Caret,
    [
      ['^~', Token.Xnor],
      ['^', Token.Xor],
    ],
  ],
  [
    Char.Less,
    [
      ['<<<', Token.ArithmeticLeft],
      ['<<', Token.ShiftLeft],
      ['<=', Token.LessEqual],
      ['<', Token.Less],
    ],
  ],
  [
    Char.Greater,
    [
      ['>>>', Token.ArithmeticRight],
      ['>>', Token.ShiftRight],
      ['>=', Token.GreaterEqual],
      ['>', Token.Greater],
    ],
  ],
  [
    Char.Star,
    [
      ['**', Token.Power],
      ['*', Token.Star],
    ],
  ],
  [
    Char.Plus,
    [
      ['+:', Token.PlusColon],
      ['+', Token.Plus],
    ],
  ],
  [
    Char.Minus,
    [
      ['-:', Token.MinusColon],
      ['->', Token.Arrow],
      ['-', Token.Minus],
    ],
  ],
]);

/** What of a scanner an operator needs. */
interface OperatorText {
  kind: number;
  readonly text: Uint8Array;
  at: number;
}

/** Takes the longest operator that begins with `first`, the byte before `at`; false if none. */
export function scanOperator(scanner: OperatorText, first: number): boolean {
  for (const [text, kind] of operators.get(first) ?? []) {
    if (!follows(scanner.text, scanner.at, text)) continue;
    scanner.at += text.length - 1;
    scanner.kind = kind;
    return true;
  }
  return false;
}

function follows(bytes: Uint8Array, at: number, text: string): boolean {
  for (let i = 1; i < text.length; i++) {
    if (bytes[at + i - 1] !== text.charCodeAt(i)) return false;
  }
  return true;
}
