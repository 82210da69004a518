import { closeSync, openSync, write } from 'node:fs';
import { setTimeout } from 'node:timers/promises';
import { STANDARD } from '../fileForm.js';
import { type ByteSink, ReaderGone } from './byteSink.js';

/** How long to wait for a pipe that takes nothing and cannot be waited for. */
const FULL_PIPE_MS = 1;

/** Writes to what is no plain file, at the pace at which it is read: standard output, a pipe. */
export class PipeSink implements ByteSink {
  readonly #path: string;
  readonly #isStandard: boolean;
  #file: number | undefined;

  /** `-` is standard output. */
  constructor(path: string) {
    this.#path = path;
    this.#isStandard = path === STANDARD;
    this.#file = this.#isStandard ? process.stdout.fd : openSync(path, 'w');
  }

  async write(piece: Uint8Array): Promise<void> {
    for (let done = 0; done < piece.length; ) {
      done += await this.#put(piece.subarray(done));
    }
  }

  finish(): void {
    // All is written when `write` returns.
  }

  keep(): void {
    this.discard();
  }

  discard(): void {
    if (this.#file !== undefined && !this.#isStandard) closeSync(this.#file);
    this.#file = undefined;
  }

  // Not by `process.stdout`, whose writes to a pipe keep every event waiting, interrupts too.
  async #put(piece: Uint8Array): Promise<number> {
    const file = this.#file;
    if (file === undefined) throw new RangeError('the pipe is closed already');
    try {
      return await new Promise((resolve, reject) => {
        write(file, piece, (error, written) => (error ? reject(error) : resolve(written)));
      });
    } catch (error) {
      const { code } = error as NodeJS.ErrnoException;
      if (code === 'EPIPE') throw new ReaderGone();
      if (code !== 'EAGAIN') throw Object.assign(error as Error, { path: this.#path });
      await setTimeout(FULL_PIPE_MS);
      return 0;
    }
  }
}
