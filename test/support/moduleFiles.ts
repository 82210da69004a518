import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll } from 'vitest';

/** Writes JavaScript modules, each to a file of its own; all are gone after the tests. */
export function moduleFiles(): (text: string) => string {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-modules-'));
  afterAll(() => rmSync(folder, { recursive: true }));
  let count = 0;
  return (text) => {
    const path = join(folder, `m${count++}.mjs`);
    writeFileSync(path, text);
    return path;
  };
}
