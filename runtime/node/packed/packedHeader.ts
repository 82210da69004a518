import { wholeFileError } from '../fileForm.js';

/*
 * Packed rows, all numbers least significant byte first:
 *
 *   byte 0   8 bytes   43 53 2D 52 4F 57 53 0A, "CS-ROWS" and a line feed
 *        8   2         version, 1
 *       10   2         flags: 1 each row has a second group that tells what is x,
 *                      2 each row begins with its cycle
 *       12   4         bytes of this header, a multiple of 8; the rows follow it
 *       16   4         bytes of a row
 *       20   4         number of columns
 *       24             the columns: width in bits (4 bytes), bytes of the name (2), the name in
 *                      UTF-8, `port` or `port[7:4]`; then zeros to the end of the header
 *
 * A row is: its cycle (8 bytes, below 2^53) where flag 2 is set; then the columns in order, each
 * least significant bit first, joined, the first bit in the lowest place of the first byte, padded
 * with zeros to a multiple of 4 bytes; then, where flag 1 is set, as many bytes with a 1 for each
 * bit that is x (and 0 in the first group). Without cycles, row k is cycle k. With them, cycles
 * ascend, and a stimulus row lasts until the next one.
 */

const MAGIC = Uint8Array.of(0x43, 0x53, 0x2d, 0x52, 0x4f, 0x57, 0x53, 0x0a);
const VERSION = 1;
const FIXED = 24;
const LONGEST_HEADER = 1 << 24;
const FLAG_UNKNOWN = 1;
const FLAG_NUMBERED = 2;

/** A column of packed rows. */
export interface PackedColumn {
  readonly name: string;
  readonly width: number;
}

/** What the header of packed rows tells. */
export interface PackedShape {
  readonly columns: readonly PackedColumn[];
  /** Whether a group follows that tells which bits are x. */
  readonly threeValued: boolean;
  /** Whether each row begins with its cycle. */
  readonly numbered: boolean;
}

/** Words of one group of values. */
export const groupWords = ({ columns }: PackedShape): number =>
  (columns.reduce((sum, { width }) => sum + width, 0) + 31) >>> 5;

/** Words of a whole row. */
export const rowWords = (shape: PackedShape): number =>
  groupWords(shape) * (shape.threeValued ? 2 : 1) + (shape.numbered ? 2 : 0);

/** The header of packed rows. */
export function packedHeader(shape: PackedShape): Uint8Array {
  const names = shape.columns.map(({ name }) => new TextEncoder().encode(name));
  const length = names.reduce((sum, name) => sum + 6 + name.length, FIXED);
  const bytes = new Uint8Array(Math.ceil(length / 8) * 8);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC);
  view.setUint16(8, VERSION, true);
  const flags = (shape.threeValued ? FLAG_UNKNOWN : 0) | (shape.numbered ? FLAG_NUMBERED : 0);
  view.setUint16(10, flags, true);
  view.setUint32(12, bytes.length, true);
  view.setUint32(16, rowWords(shape) * 4, true);
  view.setUint32(20, names.length, true);
  let at = FIXED;
  shape.columns.forEach(({ width }, i) => {
    const name = names[i]!;
    view.setUint32(at, width, true);
    view.setUint16(at + 4, name.length, true);
    bytes.set(name, at + 6);
    at += 6 + name.length;
  });
  return bytes;
}

/** Bytes of the header that `bytes` begin with; undefined where they are too few to tell. */
export function headerLength(path: string, bytes: Uint8Array): number | undefined {
  const wrong = MAGIC.findIndex((byte, i) => i < bytes.length && bytes[i] !== byte);
  if (wrong >= 0) throw wholeFileError(path, 'this is no file of packed rows');
  if (bytes.length < FIXED) return undefined;
  const view = viewOf(bytes);
  const version = view.getUint16(8, true);
  if (version !== VERSION) {
    throw wholeFileError(path, `packed rows of version ${version}; only ${VERSION} can be read`);
  }
  const length = view.getUint32(12, true);
  if (length < FIXED || length % 8 !== 0 || length > LONGEST_HEADER) throw damaged(path);
  return length;
}

/** Reads a whole header. Throws `FileError` where it contradicts itself. */
export function readHeader(path: string, bytes: Uint8Array): PackedShape {
  const view = viewOf(bytes);
  const flags = view.getUint16(10, true);
  const count = view.getUint32(20, true);
  const columns: PackedColumn[] = [];
  let at = FIXED;
  for (let i = 0; i < count; i++) {
    if (at + 6 > bytes.length) throw damaged(path);
    const width = view.getUint32(at, true);
    const end = at + 6 + view.getUint16(at + 4, true);
    if (end > bytes.length || width === 0) throw damaged(path);
    columns.push({ name: new TextDecoder().decode(bytes.subarray(at + 6, end)), width });
    at = end;
  }
  const threeValued = (flags & FLAG_UNKNOWN) !== 0;
  const shape = { columns, threeValued, numbered: (flags & FLAG_NUMBERED) !== 0 };
  const isKnown = flags <= (FLAG_UNKNOWN | FLAG_NUMBERED);
  if (!isKnown || view.getUint32(16, true) !== rowWords(shape) * 4) throw damaged(path);
  return shape;
}

const viewOf = (bytes: Uint8Array): DataView =>
  new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);

const damaged = (path: string): Error =>
  wholeFileError(path, 'the header of these packed rows contradicts itself');
