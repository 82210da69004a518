import { existsSync, mkdtempSync, readdirSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { makeFolder, removeFolders } from '../../compiler/report/makeFolder.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-folders-'));
afterAll(() => rmSync(folder, { recursive: true }));
const at = (...names: string[]): string => join(folder, ...names);

describe('makeFolder', () => {
  it('makes what is missing and tells of it, outermost first', () => {
    expect(makeFolder(at('a', 'b'))).toEqual([at('a'), at('a', 'b')]);
    expect(makeFolder(at('a', 'b'))).toEqual([]);
    expect(makeFolder(at('a', 'c'))).toEqual([at('a', 'c')]);
  });

  it('makes nothing where one of them cannot be made', () => {
    writeFileSync(at('file'), '');
    symlinkSync(at('nowhere'), at('link'));
    expect(() => makeFolder(at('file', 'x'))).toThrow(/ENOTDIR/);
    expect(() => makeFolder(at('link', 'x'))).toThrow(/EEXIST/);
    expect(existsSync(at('nowhere'))).toBe(false);
  });

  it.runIf(existsSync('/proc/self'))('gives up where there is a folder that takes none', () => {
    expect(() => makeFolder('/proc/none/below')).toThrow(/ENOENT/);
  });

  it('can be undone as far as nothing has come in', () => {
    const made = makeFolder(at('u', 'v', 'w'));
    writeFileSync(at('u', 'kept'), '');
    removeFolders(made);
    expect(readdirSync(at('u'))).toEqual(['kept']);
  });
});
