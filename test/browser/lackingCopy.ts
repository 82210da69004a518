import { closeSync, copyFileSync, openSync, readSync, writeSync } from 'node:fs';

// One that Chromium loads at its start, and a name of equal length that no library has.
const LOADED = 'libnss3.so';
const RENAMED = 'libnoss.so';

// The names of libraries stand in the string table of the dynamic section, near the start.
const SEARCHED_BYTES = 1 << 24;

/**
 * Copies a Chromium so that the copy needs a library that no machine has: `library`. Throws an
 * Error where the executable does not name the one that is exchanged.
 */
export function copyLacking(executable: string, copy: string): { copy: string; library: string } {
  copyFileSync(executable, copy);
  const file = openSync(copy, 'r+');
  try {
    const start = Buffer.alloc(SEARCHED_BYTES);
    readSync(file, start, 0, SEARCHED_BYTES, 0);
    const at = start.indexOf(`\0${LOADED}\0`);
    if (at < 0) throw new Error(`${executable} does not name ${LOADED}`);
    writeSync(file, RENAMED, at + 1);
  } finally {
    closeSync(file);
  }
  return { copy, library: RENAMED };
}
