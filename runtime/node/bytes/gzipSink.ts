import { constants, createGzip } from 'node:zlib';
import type { ByteSink } from './byteSink.js';

const PIECE = 1 << 18;
const MOST_PENDING = 4;

/** Compresses (RFC 1952) what goes to another sink, beside what else is to be done. */
export class GzipSink implements ByteSink {
  readonly #inner: ByteSink;
  readonly #gzip = createGzip({ level: constants.Z_BEST_SPEED, chunkSize: PIECE });
  readonly #moved: Promise<void>;
  /** Pieces that are not yet compressed. */
  #pending = 0;
  #resume: (() => void) | undefined;
  #failure: unknown;

  constructor(inner: ByteSink) {
    this.#inner = inner;
    this.#moved = this.#move();
  }

  async write(piece: Uint8Array): Promise<void> {
    this.#throwIfFailed();
    this.#pending++;
    // A copy, so that the caller goes on while it is compressed.
    this.#gzip.write(piece.slice(), () => {
      this.#pending--;
      this.#resume?.();
    });
    while (this.#pending >= MOST_PENDING) {
      await new Promise<void>((resolve) => {
        this.#resume = resolve;
      });
    }
    this.#throwIfFailed();
  }

  async finish(): Promise<void> {
    this.#gzip.end();
    await this.#moved;
    this.#throwIfFailed();
    await this.#inner.finish();
  }

  keep(): void {
    this.#inner.keep();
  }

  discard(): void {
    this.#gzip.destroy();
    this.#inner.discard();
  }

  #throwIfFailed(): void {
    if (this.#failure !== undefined) throw this.#failure;
  }

  async #move(): Promise<void> {
    try {
      for await (const piece of this.#gzip) await this.#inner.write(piece as Uint8Array);
    } catch (error) {
      this.#failure = error;
      this.#gzip.destroy();
    }
  }
}
