import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { writeWhole } from '../../compiler/report/writeWhole.js';
import { WholeFile } from '../../runtime/node/wholeFile.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-whole-'));
afterAll(() => rmSync(folder, { recursive: true }));

describe('writeWhole', () => {
  it('writes and replaces a file, and leaves nothing else behind', () => {
    const path = join(folder, 'a.svg');
    writeWhole(path, 'first');
    writeWhole(path, 'second');
    expect(readFileSync(path, 'utf8')).toBe('second');
    expect(readdirSync(folder)).toEqual(['a.svg']);
  });

  it('follows a symbolic link', () => {
    writeFileSync(join(folder, 'target.svg'), 'old');
    symlinkSync('target.svg', join(folder, 'link.svg'));
    writeWhole(join(folder, 'link.svg'), 'new');
    expect(readFileSync(join(folder, 'target.svg'), 'utf8')).toBe('new');
  });

  it('throws where there is no folder, or the path is one', () => {
    expect(() => writeWhole(join(folder, 'none', 'a.svg'), 'x')).toThrow(/ENOENT/);
    mkdirSync(join(folder, 'is.svg'));
    expect(() => writeWhole(join(folder, 'is.svg'), 'x')).toThrow(/EISDIR/);
    expect(readdirSync(folder).some((name) => name.endsWith('.partial'))).toBe(false);
  });

  it.runIf(existsSync('/dev/full'))('names the file for which there is no space', () => {
    const full = expect.objectContaining({ code: 'ENOSPC', path: '/dev/full' });
    expect(() => writeWhole('/dev/full', 'x')).toThrow(full);
  });
});

describe('a whole file', () => {
  it('leaves nothing behind where it cannot get its name', () => {
    const path = join(folder, 'taken.svg');
    const file = new WholeFile(path);
    file.put(Buffer.from('x'));
    mkdirSync(path);
    expect(() => file.finish()).toThrow(/EISDIR|ENOTEMPTY|EEXIST|EPERM/);
    expect(readdirSync(folder).some((name) => name.endsWith('.partial'))).toBe(false);
  });
});
