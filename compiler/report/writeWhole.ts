import { existsSync, realpathSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';

/**
 * Writes a text to a file that appears all at once, or not at all.
 *
 * What is no plain file (a terminal, a pipe) is written directly; a symbolic link is followed.
 * Throws what the file system throws.
 */
export function writeWhole(path: string, text: string): void {
  if (existsSync(path) && !statSync(path).isFile()) {
    writeFileSync(path, text);
    return;
  }
  const target = existsSync(path) ? realpathSync(path) : path;
  const partial = join(dirname(target), `.${basename(target)}.${process.pid}.partial`);
  try {
    writeFileSync(partial, text);
    renameSync(partial, target);
  } catch (error) {
    rmSync(partial, { force: true });
    throw error;
  }
}
