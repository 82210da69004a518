import { readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

/** Name of the file that says which process is at work on a record. */
export const LOCK = 'lock';

/** Thrown where another process is at work on a record. */
export class RecordBusy extends Error {}

/**
 * Keeps other processes off a record; returns what lets go of it. A process that was killed holds
 * it no longer. Throws `RecordBusy`, and what the file system throws.
 */
export function lockRecord(folder: string): () => void {
  const path = join(folder, LOCK);
  try {
    writeFileSync(path, `${process.pid}\n`, { flag: 'wx' });
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
    const owner = Number.parseInt(readFileSync(path, 'utf8'), 10);
    if (owner !== process.pid && isAlive(owner)) {
      throw new RecordBusy(`process ${owner} is at work on it; if that is not so, remove ${path}`);
    }
    writeFileSync(path, `${process.pid}\n`);
  }
  return () => rmSync(path, { force: true });
}

function isAlive(id: number): boolean {
  if (!Number.isInteger(id) || id <= 0) return false;
  try {
    process.kill(id, 0);
    return true;
  } catch (error) {
    // A process of someone else is one.
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}
