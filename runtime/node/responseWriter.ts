import {
  closeSync,
  existsSync,
  openSync,
  realpathSync,
  renameSync,
  rmSync,
  statSync,
  writeSync,
} from 'node:fs';
import { basename, dirname, join } from 'node:path';
import type { ModelLayout } from '../layout.js';
import type { ResponseBlock } from '../stream.js';
import { ResponseTable } from './responseTable.js';

/**
 * Writes a response table to a file that appears all at once.
 *
 * Rows go to a hidden file beside the target, which `finish` renames, so that a run that fails
 * leaves the target as it was. What is no plain file (a terminal, a pipe) is written directly.
 * Call `finish` or `discard` at the end. All methods throw what the file system throws.
 */
export class ResponseWriter {
  readonly #table: ResponseTable;
  readonly #target: string;
  readonly #partial: string | undefined;
  #file: number | undefined;

  constructor(path: string, layout: ModelLayout) {
    this.#table = new ResponseTable(layout);
    const exists = existsSync(path);
    const isPlain = !exists || statSync(path).isFile();
    // Renaming onto a symbolic link would replace the link.
    this.#target = exists && isPlain ? realpathSync(path) : path;
    if (isPlain) {
      const name = `.${basename(this.#target)}.${process.pid}.partial`;
      this.#partial = join(dirname(this.#target), name);
    }
    try {
      this.#file = openSync(this.#partial ?? this.#target, 'w');
    } catch (error) {
      // The user knows the file by the name given, not by that of the hidden one.
      throw Object.assign(error as Error, { path });
    }
    this.#put(this.#table.header());
  }

  /** Adds the rows of a block. */
  write(block: ResponseBlock): void {
    for (const piece of this.#table.rows(block)) this.#put(piece);
  }

  /** Completes the file and gives it its name. */
  finish(): void {
    this.#close();
    if (this.#partial !== undefined) renameSync(this.#partial, this.#target);
  }

  /** Gives up: nothing is left of what was written. Does nothing after `finish`. */
  discard(): void {
    if (!this.#close()) return;
    if (this.#partial !== undefined) rmSync(this.#partial, { force: true });
  }

  #close(): boolean {
    if (this.#file === undefined) return false;
    closeSync(this.#file);
    this.#file = undefined;
    return true;
  }

  #put(piece: Uint8Array): void {
    if (this.#file === undefined) throw new RangeError('the response is finished already');
    for (let done = 0; done < piece.length; ) done += writeSync(this.#file, piece, done);
  }
}
