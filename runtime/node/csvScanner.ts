import { TableError } from './tableError.js';

const QUOTE = 0x22;
const COMMA = 0x2c;
const LF = 0x0a;
const CR = 0x0d;
const SPACE = 0x20;
const ZERO = 0x30;

// A record must fit in memory; a longer one most likely lacks a closing quote.
const LONGEST_RECORD = 1 << 24;

/**
 * Finds the records and fields of comma-separated values (RFC 4180) in bytes that come in pieces.
 *
 * Lines end in LF or CRLF; a byte order mark is skipped. Fields are not copied: `fieldStart` and
 * `fieldEnd` tell where in `bytes` they are, without their quotes, until the next call of `next` or
 * `push`. Throws `TableError` for a quote that is left open or followed by text.
 */
export class CsvScanner {
  readonly path: string;
  /** The bytes that the present record is in. */
  bytes: Uint8Array = new Uint8Array(0);
  /** Fields of the present record. */
  fieldCount = 0;
  #bounds = new Uint32Array(64);
  #position = 0;
  #ended = false;
  #recordStart = 0;
  /** Line of the present record's first byte, and of the next record's. */
  #line = 1;
  #nextLine = 1;
  #linesInQuotes = 0;

  constructor(path: string) {
    this.path = path;
  }

  /** Adds the next piece of the file. */
  push(piece: Uint8Array): void {
    const rest = this.bytes.subarray(this.#position);
    if (rest.length > LONGEST_RECORD) {
      throw new TableError(this.path, this.#nextLine, 1, 'record too long; is a quote left open?');
    }
    this.bytes = rest.length === 0 ? piece : joined(rest, piece);
    this.#position = 0;
  }

  /** Says that no more pieces come. */
  end(): void {
    this.#ended = true;
  }

  /** Goes to the next record; false where it is not all there yet, or after the last one. */
  next(): boolean {
    const { bytes } = this;
    let at = this.#position;
    if (at === bytes.length) return false;
    if (this.#nextLine === 1 && at === 0) {
      if (bytes.length < 3 && !this.#ended) return false;
      if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) at = 3;
    }
    this.fieldCount = 0;
    this.#recordStart = at;
    this.#line = this.#nextLine;
    this.#linesInQuotes = 0;
    for (;;) {
      const stop = bytes[at] === QUOTE ? this.#quotedField(at) : this.#plainField(at);
      if (stop < 0) return false;
      at = stop + 1;
      if (bytes[stop] === COMMA) continue;
      this.#position = Math.min(at, bytes.length);
      this.#nextLine = this.#line + this.#linesInQuotes + 1;
      return true;
    }
  }

  /** Where a field starts in `bytes`. */
  fieldStart(field: number): number {
    return this.#bounds[field * 2]!;
  }

  /** Where a field ends in `bytes`, exclusive. */
  fieldEnd(field: number): number {
    return this.#bounds[field * 2 + 1]!;
  }

  /** A field as text, with doubled quotes made single. */
  text(field: number): string {
    const start = this.fieldStart(field);
    const text = new TextDecoder().decode(this.bytes.subarray(start, this.fieldEnd(field)));
    const isQuoted = start > this.#recordStart && this.bytes[start - 1] === QUOTE;
    return isQuoted ? text.replaceAll('""', '"') : text;
  }

  /** A field as a decimal number without sign; NaN if it is none or beyond 2^53. */
  count(field: number): number {
    let at = this.fieldStart(field);
    let end = this.fieldEnd(field);
    while (this.bytes[at] === SPACE) at++;
    while (end > at && this.bytes[end - 1] === SPACE) end--;
    let number = at < end ? 0 : Number.NaN;
    for (; at < end; at++) {
      const digit = this.bytes[at]! - ZERO;
      number = digit >= 0 && digit <= 9 ? number * 10 + digit : Number.NaN;
    }
    return number <= Number.MAX_SAFE_INTEGER ? number : Number.NaN;
  }

  /** Line and column, both from 1, of a field; of the record's end for a field that it lacks. */
  place(field: number): { line: number; column: number } {
    const at =
      field < this.fieldCount ? this.fieldStart(field) : this.fieldEnd(this.fieldCount - 1);
    return this.#placeOf(at);
  }

  /** An error at a field; at the record's end for a field that it lacks. */
  error(field: number, reason: string): TableError {
    const { line, column } = this.place(field);
    return new TableError(this.path, line, column, reason);
  }

  // These two return where the field's separator is (the end of the bytes at the end of the file),
  // or -1 where more bytes are needed to tell.

  #plainField(start: number): number {
    const { bytes } = this;
    const { length } = bytes;
    let at = start;
    while (at < length && bytes[at] !== COMMA && bytes[at] !== LF) at++;
    if (at === length && !this.#ended) return -1;
    const isLast = bytes[at] !== COMMA;
    this.#add(start, isLast && at > start && bytes[at - 1] === CR ? at - 1 : at);
    return at;
  }

  #quotedField(open: number): number {
    const { bytes } = this;
    const { length } = bytes;
    let at = open + 1;
    for (; ; at++) {
      while (at < length && bytes[at] !== QUOTE) if (bytes[at++] === LF) this.#linesInQuotes++;
      if (at + 1 >= length && !this.#ended) return -1;
      if (at >= length) throw this.#errorAt(open, 'this quote is never closed');
      if (bytes[at + 1] !== QUOTE) break;
      at++;
    }
    this.#add(open + 1, at);
    let stop = at + 1;
    if (bytes[stop] === CR) {
      if (stop + 1 >= length && !this.#ended) return -1;
      if (stop + 1 >= length || bytes[stop + 1] === LF) stop++;
    }
    if (stop >= length || bytes[stop] === COMMA || bytes[stop] === LF)
      return Math.min(stop, length);
    throw this.#errorAt(stop, 'a comma or the end of the line must follow the closing quote');
  }

  #add(start: number, end: number): void {
    const place = this.fieldCount++ * 2;
    if (place === this.#bounds.length) {
      const larger = new Uint32Array(place * 2);
      larger.set(this.#bounds);
      this.#bounds = larger;
    }
    this.#bounds[place] = start;
    this.#bounds[place + 1] = end;
  }

  #errorAt(at: number, reason: string): TableError {
    const { line, column } = this.#placeOf(at);
    return new TableError(this.path, line, column, reason);
  }

  #placeOf(at: number): { line: number; column: number } {
    const before = this.bytes.subarray(this.#recordStart, at);
    const lineStart = before.lastIndexOf(LF) + 1;
    const line = this.#line + before.reduce((lines, byte) => lines + (byte === LF ? 1 : 0), 0);
    return { line, column: new TextDecoder().decode(before.subarray(lineStart)).length + 1 };
  }
}

function joined(first: Uint8Array, second: Uint8Array): Uint8Array {
  const both = new Uint8Array(first.length + second.length);
  both.set(first);
  both.set(second, first.length);
  return both;
}
