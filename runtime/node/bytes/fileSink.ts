import { WholeFile } from '../wholeFile.js';
import type { ByteSink } from './byteSink.js';

/** Writes to a file that appears all at once. */
export class FileSink implements ByteSink {
  readonly #file: WholeFile;

  constructor(path: string) {
    this.#file = new WholeFile(path);
  }

  write(piece: Uint8Array): void {
    this.#file.put(piece);
  }

  finish(): void {
    // All is written when `write` returns.
  }

  keep(): void {
    this.#file.finish();
  }

  discard(): void {
    this.#file.discard();
  }
}
