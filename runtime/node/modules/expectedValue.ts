import { type ModelLayout, rowStride } from '../../layout.js';
import { formatValue } from '../../valueText.js';
import type { PortColumn } from '../columns.js';
import { putWords, ValueParser } from '../valueParser.js';

/** Compares outputs with values as JavaScript code gives them: numbers, bigints, booleans, texts. */
export class ExpectedValue {
  readonly #layout: ModelLayout;
  readonly #parser: ValueParser;
  readonly #row: Uint32Array;
  readonly #encoder = new TextEncoder();

  constructor(layout: ModelLayout) {
    this.#layout = layout;
    const widest = Math.max(0, ...layout.outputs.ports.map(({ width }) => width));
    this.#parser = new ValueParser(widest, { unknown: layout.threeValued, open: true });
    this.#row = new Uint32Array(rowStride(layout.outputs, layout.threeValued));
  }

  /** Whether the row at word `at` has the value in a column; false also for what is no value. */
  matches(column: PortColumn, rows: Uint32Array, at: number, value: unknown): boolean {
    if (this.#read(column, value) !== undefined) return false;
    const { outputs, threeValued } = this.#layout;
    const unknownAt = threeValued ? at + outputs.words : undefined;
    return this.#parser.matches(column, rows, at, unknownAt);
  }

  /** A value in the form of a response table; an Error that tells what is wrong with it. */
  text(column: PortColumn, value: unknown): string | Error {
    const refusal = this.#read(column, value);
    if (refusal !== undefined) return new Error(`${column.name} is ${String(value)}: ${refusal}`);
    if (typeof value === 'string') return value;
    const { outputs, threeValued } = this.#layout;
    putWords(this.#row, 0, column.offset, column.width, this.#parser.value);
    return formatValue(column, this.#row, 0, threeValued ? outputs.words : undefined);
  }

  #read({ width }: PortColumn, value: unknown): string | undefined {
    const isWhole = typeof value === 'number' && Number.isSafeInteger(value) && value >= 0;
    const isLong = typeof value === 'bigint' && value >= 0n;
    if (!isWhole && !isLong && typeof value !== 'boolean' && typeof value !== 'string') {
      return 'a value is a whole number from 0 on, a bigint, a boolean or a text as in a table';
    }
    const bytes = this.#encoder.encode(
      typeof value === 'boolean' ? `${Number(value)}` : `${value}`,
    );
    return this.#parser.parse(bytes, 0, bytes.length, width);
  }
}
