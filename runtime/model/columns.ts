import type { ModelLayout, PortLayout } from '../layout.js';
import { readBits, writeBits } from '../rowBits.js';
import { shown } from './values.js';

/** Values of one port over cycles: `columnWords` entries a cycle, least significant first. */
export type Column = Uint8Array | Uint16Array | Uint32Array;

/** Entries of a column for one cycle: 1 up to 32 bits, above that one for every 32 bits. */
export const columnWords = ({ width }: Pick<PortLayout, 'width'>): number =>
  Math.max(1, (width + 31) >>> 5);

/** Checks a column of a stimulus. Throws TypeError for its kind, RangeError for its length. */
export function checkColumn(port: PortLayout, column: unknown, cycles: number): Column {
  const words = columnWords(port);
  const isWide = port.width > 32;
  const isColumn =
    column instanceof Uint32Array ||
    (!isWide && (column instanceof Uint8Array || column instanceof Uint16Array));
  if (!isColumn) {
    const kinds = isWide ? 'a Uint32Array' : 'a Uint8Array, Uint16Array or Uint32Array';
    throw new TypeError(`${port.name} takes ${kinds}, got ${shown(column)}`);
  }
  if (column.length >= cycles * words) return column;
  const each = words === 1 ? '' : ` (${words} for each of ${cycles} cycles)`;
  throw new RangeError(`${port.name} needs ${cycles * words} values${each}, got ${column.length}`);
}

/** A column, its port, and the first word in a row of the group of values that it goes to. */
export interface PlacedColumn {
  readonly port: PortLayout;
  readonly column: Column;
  /** 0 for values, `RowLayout.words` for what tells which bits are x. */
  readonly group: number;
}

/**
 * Writes cycles `first` to `first + cycles - 1` of columns into packed rows. Throws RangeError for
 * an entry with bits that the port does not have.
 */
export function fillRows(
  rows: Uint32Array,
  stride: number,
  columns: readonly PlacedColumn[],
  first: number,
  cycles: number,
): void {
  for (const { port, column, group } of columns) {
    const words = columnWords(port);
    for (let word = 0; word < words; word++) {
      const bit = port.offset + 32 * word;
      const count = Math.min(32, port.width - 32 * word);
      const highest = 2 ** count - 1;
      for (let i = 0; i < cycles; i++) {
        const value = column[(first + i) * words + word]!;
        if (value > highest) refuseEntry(port, first + i, highest, value);
        writeBits(rows, i * stride + group, bit, count, value);
      }
    }
  }
}

/** Reads cycles of packed rows into columns, at their cycle `first` and on. */
export function readRows(
  rows: Uint32Array,
  stride: number,
  columns: readonly PlacedColumn[],
  first: number,
  cycles: number,
): void {
  for (const { port, column, group } of columns) {
    const words = columnWords(port);
    for (let word = 0; word < words; word++) {
      const bit = port.offset + 32 * word;
      const count = Math.min(32, port.width - 32 * word);
      for (let i = 0; i < cycles; i++) {
        column[(first + i) * words + word] = readBits(rows, i * stride + group, bit, count);
      }
    }
  }
}

/**
 * Bits that are x have value 0 in a row. Rows whose values say otherwise are brought into that form.
 */
export function clearUnknown(
  rows: Uint32Array,
  stride: number,
  { inputs }: ModelLayout,
  cycles: number,
): void {
  for (let at = 0; at < cycles * stride; at += stride) {
    for (let word = 0; word < inputs.words; word++) {
      rows[at + word]! &= ~rows[at + inputs.words + word]!;
    }
  }
}

/** Throws the RangeError for an entry of a column that is too high. */
export function refuseEntry(
  { name }: PortLayout,
  cycle: number,
  highest: number,
  value: number,
): never {
  throw new RangeError(`${name} takes 0 to ${highest} in cycle ${cycle}, got ${value}`);
}
