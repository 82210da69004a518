import type { PortLayout } from '../layout.js';
import { writeBits } from '../rowBits.js';
import type { RowShape } from './recording.js';

/** Rows of inputs that a table gives, each for some cycles. */
export interface Stimulus {
  readonly name: string;
  /** Packed rows, one after another. */
  readonly rows: Uint32Array;
  /** The number of the first cycle after each row. */
  readonly ends: Float64Array;
  readonly cycles: number;
}

/** Thrown for a table that cannot be used; the message begins with its place. */
export class TableProblem extends Error {}

interface Column {
  readonly title: string;
  readonly offset: number;
  readonly width: number;
}

const CYCLES = '@cycles';

/**
 * Reads a stimulus table (CSV of RFC 4180) as `clockstride run` does: the header names input ports
 * or parts of them, an empty field holds the value before, `@cycles` makes a row last.
 */
export function stimulusOf(
  name: string,
  text: string,
  inputs: readonly PortLayout[],
  { inputWords, threeValued }: RowShape,
): Stimulus {
  const table = fieldsOf(text, name);
  const header = table[0];
  if (header === undefined) throw new TableProblem(`${name}: the table is empty`);
  if (table.length === 1) throw new TableProblem(`${name}:1: no row follows the header`);
  const columns = header.map((title) =>
    title.trim() === CYCLES ? undefined : columnOf(title.trim(), inputs, name),
  );
  const rows = new Uint32Array((table.length - 1) * inputWords);
  const ends = new Float64Array(table.length - 1);
  let cycles = 0;
  for (const [index, fields] of table.slice(1).entries()) {
    const place = `${name}:${index + 2}`;
    if (fields.length !== header.length) {
      throw new TableProblem(`${place}: ${fields.length} fields, expected ${header.length}`);
    }
    if (index > 0)
      rows.copyWithin(index * inputWords, (index - 1) * inputWords, index * inputWords);
    let lasting = 1;
    for (const [i, field] of fields.entries()) {
      const value = field.trim();
      const column = columns[i];
      if (column === undefined) lasting = value === '' ? 1 : countOf(value, place);
      else if (value !== '')
        writeField(
          rows,
          index * inputWords,
          column,
          value,
          threeValued ? inputWords / 2 : undefined,
          place,
        );
    }
    cycles += lasting;
    ends[index] = cycles;
  }
  return { name, rows, ends, cycles };
}

/** The row for a cycle; after the last one its values hold. */
export function rowAt({ ends }: Stimulus, cycle: number): number {
  let low = 0;
  let high = ends.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ends[middle]! > cycle) high = middle;
    else low = middle + 1;
  }
  return low;
}

function columnOf(title: string, inputs: readonly PortLayout[], table: string): Column {
  const whole = inputs.find((port) => port.name === title);
  if (whole) return { title, offset: whole.offset, width: whole.width };
  const [, name, left, right] = /^(.*)\[(\d+)(?::(\d+))?\]$/.exec(title) ?? [];
  const port = inputs.find((each) => each.name === name && each.isVector);
  if (port === undefined) {
    const names = inputs.map((each) => each.name).join(', ');
    throw new TableProblem(`${table}:1: there is no input ${title}; there are: ${names}`);
  }
  const place = (index: number): number =>
    port.lsb <= port.msb ? index - port.lsb : port.lsb - index;
  const [high, low] = [place(Number(left)), place(Number(right ?? left))];
  if (low < 0 || high < low || high >= port.width) {
    throw new TableProblem(`${table}:1: ${title} is not within [${port.msb}:${port.lsb}]`);
  }
  return { title, offset: port.offset + low, width: high - low + 1 };
}

function writeField(
  rows: Uint32Array,
  at: number,
  { title, offset, width }: Column,
  text: string,
  unknownFrom: number | undefined,
  place: string,
): void {
  const digits = binaryOf(text, width);
  if (digits === undefined || (unknownFrom === undefined && /[xz]/.test(digits))) {
    throw new TableProblem(`${place}: ${title} takes a value of ${width} bits, got ${text}`);
  }
  for (let bit = 0; bit < width; bit++) {
    const digit = digits[width - 1 - bit]!;
    writeBits(rows, at, offset + bit, 1, Number(digit === '1'));
    if (unknownFrom !== undefined) {
      writeBits(rows, at + unknownFrom, offset + bit, 1, Number(digit === 'x' || digit === 'z'));
    }
  }
}

/** All bits of a value as digits 0, 1, x and z; undefined where it is none or too wide. */
function binaryOf(text: string, width: number): string | undefined {
  const word = text.toLowerCase().replaceAll('_', '');
  let digits: string | undefined;
  if (/^\d+$/.test(word)) digits = BigInt(word).toString(2);
  else if (/^0b[01xz]+$/.test(word)) digits = word.slice(2);
  else if (/^0x[0-9a-fxz]+$/.test(word)) {
    digits = Array.from(word.slice(2), (digit) =>
      /[xz]/.test(digit)
        ? digit.repeat(4)
        : Number.parseInt(digit, 16).toString(2).padStart(4, '0'),
    ).join('');
  } else if (/^[xz]$/.test(word) && width === 1) digits = word;
  if (digits === undefined) return undefined;
  const beyond = digits.slice(0, Math.max(0, digits.length - width));
  if (/[^0]/.test(beyond)) return /^([xz])\1*$/.test(digits) ? digits.slice(-width) : undefined;
  return digits.slice(-width).padStart(width, '0');
}

function countOf(text: string, place: string): number {
  const value = /^\d+$/.test(text) ? Number(text) : Number.NaN;
  if (Number.isSafeInteger(value) && value > 0) return value;
  throw new TableProblem(`${place}: ${CYCLES} takes a count from 1 on, got ${text}`);
}

/** Rows of fields; quoted ones may hold commas, quotes and line ends. */
function fieldsOf(text: string, name: string): string[][] {
  const rows: string[][] = [];
  let row: string[] = [];
  let at = text.startsWith('\ufeff') ? 1 : 0;
  while (at < text.length) {
    let field = '';
    if (text[at] === '"') {
      for (at++; ; at += 2) {
        const end = text.indexOf('"', at);
        if (end < 0) throw new TableProblem(`${name}:${rows.length + 1}: a quote is not closed`);
        field += text.slice(at, end);
        at = end;
        if (text[end + 1] !== '"') break;
        field += '"';
      }
      at++;
    } else {
      const end = endOfField(text, at);
      field = text.slice(at, end);
      at = end;
    }
    row.push(field);
    if (text[at] === ',') {
      at++;
      if (at === text.length) row.push('');
      continue;
    }
    if (text[at] === '\r') at++;
    if (text[at] === '\n') at++;
    if (row.length > 1 || row[0] !== '') rows.push(row);
    row = [];
  }
  if (row.length > 0) rows.push(row);
  return rows;
}

function endOfField(text: string, from: number): number {
  let at = from;
  while (at < text.length && text[at] !== ',' && text[at] !== '\n' && text[at] !== '\r') at++;
  return at;
}
