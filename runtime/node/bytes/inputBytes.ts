import { createReadStream, open } from 'node:fs';
import { stat } from 'node:fs/promises';
import { Socket } from 'node:net';
import { pipeline, type Readable } from 'node:stream';
import { promisify } from 'node:util';
import { createGunzip } from 'node:zlib';
import { isCompressed, STANDARD, wholeFileError } from '../fileForm.js';

/** Bytes in pieces. A piece must not change while the next one is awaited. */
export type TableBytes = AsyncIterable<Uint8Array> | Iterable<Uint8Array>;

const PIECE = 1 << 18;

/**
 * The bytes of a file, in pieces; of standard input where the path is `-`. What ends in `.gz` is
 * decompressed (RFC 1952). Throws, when read, what the file system throws, and `FileError` for
 * compressed data that are damaged.
 */
export async function* inputBytes(path: string): AsyncGenerator<Uint8Array, void, undefined> {
  const bytes = await openBytes(path);
  try {
    yield* isCompressed(path) ? decompressed(path, bytes) : bytes;
  } catch (error) {
    // Whoever is interrupted lets go of standard input, which then ends.
    const isLeft = (error as NodeJS.ErrnoException).code === 'ERR_STREAM_PREMATURE_CLOSE';
    if (isLeft && path === STANDARD) return;
    // What fails while reading, as a directory does, comes without its name.
    const isNamed = !('syscall' in (error as object)) || 'path' in (error as object);
    throw isNamed ? error : Object.assign(error as Error, { path });
  }
}

async function openBytes(path: string): Promise<Readable> {
  if (path === STANDARD) return process.stdin;
  if (!(await stat(path)).isFIFO()) return createReadStream(path, { highWaterMark: PIECE });
  // A file that waits for a pipe to be written cannot be closed before it is.
  const fd = await promisify(open)(path, 'r');
  return new Socket({ fd, readable: true, writable: false });
}

async function* decompressed(path: string, bytes: Readable): AsyncGenerator<Uint8Array> {
  const plain = createGunzip({ chunkSize: PIECE });
  // Errors come out of the iteration; the callback keeps them from being thrown twice.
  pipeline(bytes, plain, () => undefined);
  try {
    yield* plain;
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code ?? '';
    if (!code.startsWith('Z_')) throw error;
    throw wholeFileError(path, REASONS[code] ?? 'the compressed data are damaged');
  } finally {
    plain.destroy();
  }
}

const REASONS: Readonly<Record<string, string>> = {
  Z_BUF_ERROR: 'the compressed data end too early',
};
