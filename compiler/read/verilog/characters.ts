/** Classes of bytes, as the scanner tells them apart. */
export const CharClass = {
  Other: 0,
  Space: 1,
  /** Letters and `_`: a simple identifier begins with one. */
  Letter: 2,
  Digit: 3,
  /** `$`: inside an identifier, or before a system name. */
  Dollar: 4,
} as const;

/** The class of each byte; those from `Letter` on may stand inside a simple identifier. */
export const charClass = classes();

function classes(): Uint8Array {
  const table = new Uint8Array(256);
  for (const space of [9, 10, 11, 12, 13, 32]) table[space] = CharClass.Space;
  for (let c = 0; c < 26; c++) {
    table[65 + c] = CharClass.Letter;
    table[97 + c] = CharClass.Letter;
  }
  table[95] = CharClass.Letter;
  table[36] = CharClass.Dollar;
  for (let c = 48; c < 58; c++) table[c] = CharClass.Digit;
  return table;
}

/** The ASCII codes that readers of Verilog text compare with. */
export const Char = {
  LineFeed: 10,
  Space: 32,
  Exclamation: 33,
  Quote: 34,
  Hash: 35,
  Dollar: 36,
  Percent: 37,
  Ampersand: 38,
  Apostrophe: 39,
  LeftParen: 40,
  RightParen: 41,
  Star: 42,
  Plus: 43,
  Comma: 44,
  Minus: 45,
  Dot: 46,
  Slash: 47,
  Zero: 48,
  Colon: 58,
  Semicolon: 59,
  Less: 60,
  Equals: 61,
  Greater: 62,
  Question: 63,
  At: 64,
  UpperE: 69,
  UpperS: 83,
  LeftBracket: 91,
  Backslash: 92,
  RightBracket: 93,
  Caret: 94,
  Underscore: 95,
  Backtick: 96,
  LowerE: 101,
  LowerS: 115,
  LeftBrace: 123,
  Bar: 124,
  RightBrace: 125,
  Tilde: 126,
} as const;

/** Whether a byte may stand inside a simple identifier. Undefined (past the end) may not. */
export function isNamePart(byte: number | undefined): boolean {
  return byte !== undefined && charClass[byte]! >= CharClass.Letter;
}

/** Whether a byte is white space. Undefined (past the end) is not. */
export function isSpace(byte: number | undefined): boolean {
  return byte !== undefined && charClass[byte]! === CharClass.Space;
}
