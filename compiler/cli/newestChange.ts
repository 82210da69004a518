import { readdirSync, statSync } from 'node:fs';
import { join } from 'node:path';

/** When a JavaScript or TypeScript file below a folder was last changed, in milliseconds. */
export function newestChange(folder: string): number {
  let newest = 0;
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) newest = Math.max(newest, newestChange(path));
    else if (/(?<!\.d)\.[jt]s$/.test(entry.name)) newest = Math.max(newest, statSync(path).mtimeMs);
  }
  return newest;
}
