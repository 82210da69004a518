import { existsSync, mkdirSync, rmdirSync } from 'node:fs';
import { dirname } from 'node:path';

/**
 * Makes a folder and those around it that are missing; returns what it has made, outermost first.
 *
 * Throws what the file system throws, and has then made nothing. The recursive form of `mkdir` is
 * of no use: it tries for ever in a folder where nothing can be made, as `/proc`.
 */
export function makeFolder(path: string, mode = 0o777): string[] {
  const missing: string[] = [];
  for (let at = path; !existsSync(at) && at !== dirname(at); at = dirname(at)) missing.unshift(at);
  const made: string[] = [];
  try {
    for (const folder of missing) {
      mkdirSync(folder, { mode });
      made.push(folder);
    }
  } catch (error) {
    // Another process may have made it in the meantime; a link that leads nowhere is in the way.
    const isThere = (error as NodeJS.ErrnoException).code === 'EEXIST';
    if (isThere && existsSync(missing[made.length]!)) return [...made, ...makeFolder(path, mode)];
    removeFolders(made);
    throw error;
  }
  return made;
}

/** Removes folders that have been made, as far as they are empty; outermost first. */
export function removeFolders(folders: readonly string[]): void {
  for (const folder of folders.toReversed()) {
    try {
      rmdirSync(folder);
    } catch {
      return;
    }
  }
}
