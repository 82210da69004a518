import { existsSync, statSync } from 'node:fs';
import { isCompressed, STANDARD } from '../fileForm.js';
import type { ByteSink } from './byteSink.js';
import { FileSink } from './fileSink.js';
import { GzipSink } from './gzipSink.js';
import { PipeSink } from './pipeSink.js';

/**
 * A sink for a file, which appears when it is kept; for what is no plain file, and for standard
 * output where the path is `-`, one that writes at once. What ends in `.gz` is compressed
 * (RFC 1952). Throws what the file system throws.
 */
export function openSink(path: string): ByteSink {
  const isPlain = path !== STANDARD && (!existsSync(path) || statSync(path).isFile());
  const sink = isPlain ? new FileSink(path) : new PipeSink(path);
  return isCompressed(path) ? new GzipSink(sink) : sink;
}
