import {
  closeSync,
  existsSync,
  fsyncSync,
  ftruncateSync,
  openSync,
  realpathSync,
  renameSync,
  rmSync,
  statSync,
  writeSync,
} from 'node:fs';
import { basename, dirname, join } from 'node:path';

/**
 * A file that is written piece by piece and appears all at once.
 *
 * Pieces go to a hidden file beside the target, which `finish` renames, so that what fails leaves
 * the target as it was. What is no plain file (a terminal, a pipe) is written directly. Call
 * `finish`, `leave` or `discard` at the end. All methods throw what the file system throws.
 */
export class WholeFile {
  readonly #path: string;
  readonly #target: string;
  readonly #partial: string | undefined;
  #file: number | undefined;
  #length: number;

  /**
   * `mark` tells the hidden file apart from those of others; by it one that was left is found
   * again. With `from`, such a file is cut to that length and continued.
   */
  constructor(path: string, mark = `${process.pid}`, from?: number) {
    this.#path = path;
    const exists = existsSync(path);
    const isPlain = !exists || statSync(path).isFile();
    // Renaming onto a symbolic link would replace the link.
    this.#target = exists && isPlain ? realpathSync(path) : path;
    if (isPlain) this.#partial = partialPath(this.#target, mark);
    this.#length = from ?? 0;
    try {
      this.#file = openSync(this.#partial ?? this.#target, from === undefined ? 'w' : 'r+');
      if (from !== undefined) ftruncateSync(this.#file, from);
    } catch (error) {
      throw this.#named(error);
    }
  }

  /** Bytes written so far. */
  get length(): number {
    return this.#length;
  }

  /** Adds a piece. Throws RangeError once the file is closed. */
  put(piece: Uint8Array): void {
    if (this.#file === undefined) throw new RangeError('the file is finished already');
    const from = this.#partial === undefined ? undefined : this.#length;
    for (let done = 0; done < piece.length; ) {
      const at = from === undefined ? null : from + done;
      try {
        done += writeSync(this.#file, piece, done, piece.length - done, at);
      } catch (error) {
        throw this.#named(error);
      }
    }
    this.#length += piece.length;
  }

  /** Completes the file and gives it its name; where that fails, nothing is left of it. */
  finish(): void {
    this.#close();
    if (this.#partial === undefined) return;
    try {
      renameSync(this.#partial, this.#target);
    } catch (error) {
      rmSync(this.#partial, { force: true });
      throw error;
    }
  }

  /** Stops writing, but leaves the hidden file to be continued. */
  leave(): void {
    if (this.#file !== undefined && this.#partial !== undefined) fsyncSync(this.#file);
    this.#close();
  }

  /** Gives up: nothing is left of what was written. Does nothing after `finish` or `leave`. */
  discard(): void {
    if (!this.#close()) return;
    if (this.#partial !== undefined) rmSync(this.#partial, { force: true });
  }

  // The user knows the file by the name given, not by that of the hidden one.
  #named(error: unknown): Error {
    return Object.assign(error as Error, { path: this.#path });
  }

  #close(): boolean {
    if (this.#file === undefined) return false;
    closeSync(this.#file);
    this.#file = undefined;
    return true;
  }
}

/** Where the hidden file of a target stands. */
export const partialPath = (target: string, mark: string): string =>
  join(dirname(target), `.${basename(target)}.${mark}.partial`);
