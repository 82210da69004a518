/** What `BenchScanner.next` has found; single characters stand for themselves. */
export const Token = { End: 0, Word: 1, Open: 40, Close: 41, Comma: 44, Equals: 61 } as const;

const HASH = 35;
const NEWLINE = 10;
const SPACE = 32;

/**
 * Splits the ISCAS'89 text form into words and the four characters `( ) , =`.
 *
 * A word is any run of other visible bytes; `#` begins a comment that ends with its line.
 */
export class BenchScanner {
  readonly #bytes: Uint8Array;
  /** A `Token`. */
  token: number = Token.End;
  /** Where the token begins and ends, in bytes. */
  start = 0;
  end = 0;
  /** Where the token before it ended. */
  previousEnd = 0;

  constructor(bytes: Uint8Array) {
    this.#bytes = bytes;
    this.next();
  }

  /** Goes to the next token. */
  next(): void {
    const bytes = this.#bytes;
    this.previousEnd = this.end;
    let at = this.end;
    for (; at < bytes.length; at++) {
      const byte = bytes[at]!;
      if (byte === HASH) at = this.#lineEnd(at) - 1;
      else if (byte > SPACE) break;
    }
    this.start = at;
    if (at === bytes.length) {
      this.token = Token.End;
    } else if (isPunctuation(bytes[at]!)) {
      this.token = bytes[at++]!;
    } else {
      this.token = Token.Word;
      while (at < bytes.length && isWordByte(bytes[at]!)) at++;
    }
    this.end = at;
  }

  /** Goes to the first token of the first line that begins after `offset`. */
  skipLine(offset: number): void {
    this.end = this.#lineEnd(offset);
    this.next();
  }

  #lineEnd(from: number): number {
    const end = this.#bytes.indexOf(NEWLINE, from);
    return end < 0 ? this.#bytes.length : end;
  }
}

const isPunctuation = (byte: number): boolean =>
  byte === Token.Open || byte === Token.Close || byte === Token.Comma || byte === Token.Equals;

const isWordByte = (byte: number): boolean => byte > SPACE && byte !== HASH && !isPunctuation(byte);
