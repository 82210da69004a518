import { fromBase64, toBase64 } from './base64.js';

/** Fewer entries are written as they stand. */
const FEWEST_ROWS = 4;

/**
 * Turns a value into one that JSON can hold in little space: arrays of objects with the same keys
 * become `{columns}`, byte arrays `{bytes}` in base64. `unfolded` is the way back.
 */
export function folded(value: unknown): unknown {
  if (value instanceof Uint8Array) return { bytes: toBase64(value) };
  if (Array.isArray(value))
    return isTable(value) ? { columns: columnsOf(value) } : value.map(folded);
  return isObject(value) ? mapped(value, folded) : value;
}

/** What `folded` was given. */
export function unfolded(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(unfolded);
  if (!isObject(value)) return value;
  if (typeof value.bytes === 'string') return fromBase64(value.bytes);
  if (isObject(value.columns)) return rowsOf(value.columns);
  return mapped(value, unfolded);
}

type Row = Record<string, unknown>;

function isTable(rows: readonly unknown[]): rows is Row[] {
  if (rows.length < FEWEST_ROWS) return false;
  const keys = isObject(rows[0]) ? Object.keys(rows[0]).join() : '';
  return keys !== '' && rows.every((row) => isObject(row) && Object.keys(row).join() === keys);
}

const columnsOf = (rows: readonly Row[]): Record<string, unknown[]> =>
  mapped(rows[0]!, (_, key) => rows.map((row) => folded(row[key])));

function rowsOf(columns: Row): Row[] {
  const entries = Object.entries(columns) as [string, unknown[]][];
  const rows = Array.from(entries[0]![1], (): Row => ({}));
  for (const [key, column] of entries) {
    for (let i = 0; i < rows.length; i++) rows[i]![key] = unfolded(column[i]);
  }
  return rows;
}

const isObject = (value: unknown): value is Row =>
  typeof value === 'object' &&
  value !== null &&
  !ArrayBuffer.isView(value) &&
  !Array.isArray(value);

function mapped<T>(object: Row, change: (value: unknown, key: string) => T): Record<string, T> {
  return Object.fromEntries(
    Object.entries(object).map(([key, value]) => [key, change(value, key)]),
  );
}
