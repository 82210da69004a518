import { inputBytes, type TableBytes } from '../bytes/inputBytes.js';
import { wholeFileError } from '../fileForm.js';
import type { FileError } from '../tableError.js';
import { headerLength, type PackedShape, readHeader, rowWords } from './packedHeader.js';

const IS_BIG_ENDIAN = new Uint8Array(Uint32Array.of(1).buffer)[0] === 0;

/** Packed rows being read: the header first, then whole rows. */
export class PackedInput {
  readonly path: string;
  readonly shape: PackedShape;
  /** Rows handed out so far. */
  rows = 0;
  readonly #pieces: AsyncIterator<Uint8Array> | Iterator<Uint8Array>;
  readonly #rowBytes: number;
  /** What has come and was not handed out. */
  #rest: Uint8Array;

  private constructor(
    path: string,
    shape: PackedShape,
    pieces: AsyncIterator<Uint8Array> | Iterator<Uint8Array>,
    rest: Uint8Array,
  ) {
    this.path = path;
    this.shape = shape;
    this.#pieces = pieces;
    this.#rest = rest;
    this.#rowBytes = rowWords(shape) * 4;
  }

  /**
   * Reads the header of the file at `path`, or of `bytes` if given. Throws `FileError`, and what
   * the file system throws.
   */
  static async open(path: string, bytes: TableBytes = inputBytes(path)): Promise<PackedInput> {
    const pieces =
      Symbol.asyncIterator in bytes ? bytes[Symbol.asyncIterator]() : bytes[Symbol.iterator]();
    try {
      let got: Uint8Array = new Uint8Array(0);
      for (;;) {
        const length = headerLength(path, got);
        if (length !== undefined && got.length >= length) {
          const shape = readHeader(path, got.subarray(0, length));
          return new PackedInput(path, shape, pieces, got.subarray(length));
        }
        const piece = await pieces.next();
        if (piece.done) throw wholeFileError(path, 'the header of packed rows is cut short');
        got = joined(got, piece.value);
      }
    } catch (error) {
      await pieces.return?.();
      throw error;
    }
  }

  /**
   * The next whole rows, `rowWords` words each; undefined after the last one. The array may be
   * changed. Throws `FileError` where the last row is cut short.
   */
  async next(): Promise<Uint32Array | undefined> {
    for (;;) {
      const whole =
        this.#rowBytes === 0 ? 0 : this.#rest.length - (this.#rest.length % this.#rowBytes);
      if (whole > 0) return this.#hand(whole);
      const piece = await this.#pieces.next();
      if (!piece.done) this.#rest = joined(this.#rest, piece.value);
      else if (this.#rest.length === 0) return undefined;
      else throw wholeFileError(this.path, `row ${this.rows} is cut short`);
    }
  }

  /** Lets go of the file. */
  async close(): Promise<void> {
    await this.#pieces.return?.();
  }

  #hand(length: number): Uint32Array {
    const bytes = this.#rest.subarray(0, length);
    this.#rest = this.#rest.subarray(length);
    this.rows += length / this.#rowBytes;
    // Words must stand at multiples of four; mostly they do.
    const { buffer, byteOffset } = bytes.byteOffset % 4 === 0 ? bytes : bytes.slice();
    const words = new Uint32Array(buffer, byteOffset, length / 4);
    if (IS_BIG_ENDIAN) Buffer.from(buffer, byteOffset, length).swap32();
    return words;
  }
}

/** The cycle of the row at word `at`, where rows have one. */
export const cycleAt = (words: Uint32Array, at: number): number =>
  words[at + 1]! * 0x1_0000_0000 + words[at]!;

/** Says that cycles do not ascend. */
export const cycleError = (path: string, cycle: number, last: number): FileError =>
  wholeFileError(path, `cycle ${cycle} comes after cycle ${last}; cycles must ascend`);

function joined(first: Uint8Array, second: Uint8Array): Uint8Array {
  if (first.length === 0) return second;
  const both = new Uint8Array(first.length + second.length);
  both.set(first);
  both.set(second, first.length);
  return both;
}
