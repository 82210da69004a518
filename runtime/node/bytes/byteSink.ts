/**
 * Where bytes go. Call `discard` at the end in any case; it does nothing after `keep`.
 *
 * `write`, `finish` and `keep` throw what the file system throws, and `ReaderGone`.
 */
export interface ByteSink {
  /** Takes a piece, whose array may be used again when the promise, if there is one, is kept. */
  write(piece: Uint8Array): void | Promise<void>;
  /** Waits until all is written. */
  finish(): void | Promise<void>;
  /** Gives what was written its name, where it is a file. */
  keep(): void;
  /** Lets go; what was not kept is gone. */
  discard(): void;
}

/** Thrown when nobody reads what is written to a pipe any more. */
export class ReaderGone extends Error {
  constructor() {
    super('nobody reads what is written');
    this.name = 'ReaderGone';
  }
}
