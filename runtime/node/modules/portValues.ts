import type { ModelLayout, RowLayout } from '../../layout.js';
import { anyBit, readBits } from '../../rowBits.js';
import { type BitRange, formatValue } from '../../valueText.js';
import { columnOf, type PortColumn } from '../columns.js';
import { putWords, ValueParser } from '../valueParser.js';

/** A value that a module gives: a number from 0 on, or a text as a table has it (`0b1x0`). */
export type GivenValue = number | bigint | boolean | string;

/** A value that a module is given: a number up to 32 bits, a bigint beyond; a text if a bit is x. */
export type SeenValue = number | bigint | string;

/** Puts values that JavaScript code gives into packed rows. */
export class PortWriter {
  readonly #row: RowLayout;
  readonly #unknownAt: number | undefined;
  readonly #columns = new Map<string, PortColumn>();
  readonly #parser: ValueParser;
  readonly #encoder = new TextEncoder();

  constructor(row: RowLayout, threeValued: boolean) {
    this.#row = row;
    this.#unknownAt = threeValued ? row.words : undefined;
    const widest = Math.max(0, ...row.ports.map(({ width }) => width));
    this.#parser = new ValueParser(widest, { unknown: threeValued, open: false });
  }

  /** Sets a port or a part of one in the row; returns what is wrong, or undefined. */
  set(row: Uint32Array, name: string, value: unknown): string | undefined {
    const column = this.#column(name);
    if (typeof column === 'string') return column;
    const { offset, width } = column;
    const refusal = this.#read(value, width);
    if (refusal) return `${name} is ${shown(value)}: ${refusal}`;
    putWords(row, 0, offset, width, this.#parser.value);
    if (this.#unknownAt !== undefined) {
      putWords(row, this.#unknownAt, offset, width, this.#parser.unknown);
    }
    return undefined;
  }

  #column(name: string): PortColumn | string {
    const known = this.#columns.get(name);
    if (known) return known;
    const column = columnOf(name, 0, this.#row);
    if (typeof column !== 'string') this.#columns.set(name, column);
    return column;
  }

  #read(given: unknown, width: number): string | undefined {
    const parser = this.#parser;
    const value = typeof given === 'boolean' ? Number(given) : given;
    if (typeof value === 'number' && value >>> 0 === value) {
      if (width < 32 && value >>> width !== 0) return tooLarge(width);
      parser.value.fill(0);
      parser.unknown.fill(0);
      parser.value[0] = value;
      return undefined;
    }
    const isWhole = typeof value === 'number' && Number.isSafeInteger(value) && value >= 0;
    if (!isWhole && !(typeof value === 'bigint' && value >= 0n) && typeof value !== 'string') {
      return 'a value is a whole number from 0 on, a bigint, a boolean or a text as in a table';
    }
    const bytes = this.#encoder.encode(String(value));
    return parser.parse(bytes, 0, bytes.length, width);
  }
}

/** Reads a port from the packed row at word `at`. */
export function portValue(
  { offset, width }: BitRange,
  rows: Uint32Array,
  at: number,
  unknownAt: number | undefined,
): SeenValue {
  if (unknownAt !== undefined && anyBit(rows, unknownAt, offset, width)) {
    return formatValue({ offset, width }, rows, at, unknownAt);
  }
  if (width <= 32) return readBits(rows, at, offset, width);
  let value = 0n;
  for (let bit = (width - 1) & ~31; bit >= 0; bit -= 32) {
    const count = Math.min(32, width - bit);
    value = (value << 32n) | BigInt(readBits(rows, at, offset + bit, count));
  }
  return value;
}

/** All ports of the packed row at word `at`, by name. */
export function portValues(
  { ports, words }: RowLayout,
  { threeValued }: Pick<ModelLayout, 'threeValued'>,
  rows: Uint32Array,
  at: number,
): Record<string, SeenValue> {
  const unknownAt = threeValued ? at + words : undefined;
  const values: Record<string, SeenValue> = {};
  for (const port of ports) values[port.name] = portValue(port, rows, at, unknownAt);
  return values;
}

const tooLarge = (width: number): string =>
  `the value is too large for ${width === 1 ? 'one bit' : `${width} bits`}`;

const shown = (value: unknown): string =>
  typeof value === 'symbol' || typeof value === 'object' || typeof value === 'function'
    ? `of type ${typeof value}`
    : String(value);
