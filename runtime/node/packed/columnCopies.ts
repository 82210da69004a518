import { type BitCopy, joinedCopies } from '../../bitCopies.js';
import type { ModelLayout, RowLayout } from '../../layout.js';
import type { BitRange } from '../../valueText.js';
import { columnOf, overlap, type PortColumn } from '../columns.js';
import { wholeFileError } from '../fileForm.js';
import type { PackedShape } from './packedHeader.js';

/**
 * What the columns of packed rows mean in a circuit. Throws `FileError` for one that it lacks, for
 * another width, and for two that share bits.
 */
export function columnsIn(path: string, { columns }: PackedShape, row: RowLayout): PortColumn[] {
  const found = columns.map(({ name, width }, field) => {
    const column = columnOf(name, field, row);
    if (typeof column === 'string') throw wholeFileError(path, column);
    if (column.width === width) return column;
    const bits = width === 1 ? '1 bit' : `${width} bits`;
    throw wholeFileError(path, `${name} has ${bits} here and ${column.width} in the circuit`);
  });
  const shared = overlap(found);
  if (shared) {
    const [first, second] = shared;
    throw wholeFileError(path, `column ${second.name} shares bits with column ${first.name}`);
  }
  return found;
}

/** Throws `FileError` where a column is a clock, which ticks by itself. */
export function refuseClocks(
  path: string,
  { columns }: PackedShape,
  { clocks }: ModelLayout,
): void {
  const clock = clocks.find((name) => columns.some((column) => column.name === name));
  if (clock) throw wholeFileError(path, `${clock} is a clock: it ticks by itself; leave it out`);
}

/** How to get from a row of columns, one after the other, to a row of the circuit. */
export function copiesTo(columns: readonly BitRange[]): BitCopy[] {
  let from = 0;
  const copies = columns.map(({ offset, width }) => {
    from += width;
    return { from: from - width, to: offset, width };
  });
  return joinedCopies(copies);
}

/** How to get back. */
export const copiesFrom = (columns: readonly BitRange[]): BitCopy[] =>
  copiesTo(columns).map(({ from, to, width }) => ({ from: to, to: from, width }));
