import type { RowLayout } from '../../layout.js';
import { type Column, columnWords, type PlacedColumn, refuseEntry } from '../columns.js';

/** The columns of a port: one for all lanes, or one for each. */
export interface LaneColumn {
  readonly port: PlacedColumn['port'];
  readonly columns: readonly Column[];
  /** 0 for values, 1 for what tells which bits are x. */
  readonly group: 0 | 1;
}

/** Where lane rows have their words. */
export interface LaneShape {
  readonly row: RowLayout;
  readonly lanes: number;
  /** 32-bit numbers from one lane row to the next. */
  readonly stride: number;
}

/** One bit of a port: its place in a lane row, and in the entries of a column. */
interface BitPlace {
  readonly at: number;
  readonly words: number;
  readonly word: number;
  readonly bit: number;
}

function* bitsOf({ row, lanes }: LaneShape, { port, group }: LaneColumn): Generator<BitPlace> {
  const words = columnWords(port);
  for (let i = 0; i < port.width; i++) {
    const at = (group * row.bits + port.offset + i) * (lanes >>> 5);
    yield { at, words, word: i >>> 5, bit: i & 31 };
  }
}

/**
 * Writes cycles `first` to `first + cycles - 1` of columns into lane rows. Throws RangeError for an
 * entry with bits that the port does not have.
 */
export function fillLanes(
  rows: Uint32Array,
  shape: LaneShape,
  columns: readonly LaneColumn[],
  first: number,
  cycles: number,
): void {
  for (const placed of columns) {
    checkEntries(placed, first, cycles);
    for (const place of bitsOf(shape, placed)) {
      for (let part = 0; part < shape.lanes >>> 5; part++) {
        const each = placed.columns.slice(part * 32, part * 32 + 32);
        if (placed.columns.length === 1)
          fillAlike(rows, shape.stride, place, part, placed.columns[0]!, first, cycles);
        else fillBits(rows, shape.stride, place, part, each, first, cycles);
      }
    }
  }
}

function fillAlike(
  rows: Uint32Array,
  stride: number,
  { at, words, word, bit }: BitPlace,
  part: number,
  column: Column,
  first: number,
  cycles: number,
): void {
  for (let i = 0; i < cycles; i++) {
    rows[i * stride + at + part] = -((column[(first + i) * words + word]! >>> bit) & 1);
  }
}

function fillBits(
  rows: Uint32Array,
  stride: number,
  { at, words, word, bit }: BitPlace,
  part: number,
  columns: readonly Column[],
  first: number,
  cycles: number,
): void {
  for (let i = 0; i < cycles; i++) {
    const entry = (first + i) * words + word;
    let bits = 0;
    for (let lane = 0; lane < columns.length; lane++) {
      bits |= ((columns[lane]![entry]! >>> bit) & 1) << lane;
    }
    rows[i * stride + at + part] = bits;
  }
}

function checkEntries({ port, columns }: LaneColumn, first: number, cycles: number): void {
  const words = columnWords(port);
  for (let word = 0; word < words; word++) {
    const highest = 2 ** Math.min(32, port.width - 32 * word) - 1;
    for (const column of columns) {
      for (let i = first; i < first + cycles; i++) {
        const value = column[i * words + word]!;
        if (value > highest) refuseEntry(port, i, highest, value);
      }
    }
  }
}

/** Reads cycles of lane rows into columns of zeros, one for each lane, at their cycle `first` and on. */
export function readLanes(
  rows: Uint32Array,
  shape: LaneShape,
  columns: readonly LaneColumn[],
  first: number,
  cycles: number,
): void {
  for (const placed of columns) {
    for (const place of bitsOf(shape, placed)) {
      for (let lane = 0; lane < shape.lanes; lane++) {
        readBits(rows, shape.stride, place, lane, placed.columns[lane]!, first, cycles);
      }
    }
  }
}

function readBits(
  rows: Uint32Array,
  stride: number,
  { at, words, word, bit }: BitPlace,
  lane: number,
  column: Column,
  first: number,
  cycles: number,
): void {
  const from = at + (lane >>> 5);
  for (let i = 0; i < cycles; i++) {
    column[(first + i) * words + word]! |= ((rows[i * stride + from]! >>> (lane & 31)) & 1) << bit;
  }
}
