import { chmodSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findCompiler } from '../../compiler/native/findCompiler.js';

describe('the C compiler', () => {
  let folder = '';
  const place = (name: string) => join(folder, name);

  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'clockstride-test-'));
    for (const directory of ['one', 'two', 'empty']) mkdirSync(place(directory));
    for (const file of ['one/gcc', 'two/cc', 'two/mine']) {
      writeFileSync(place(file), '');
      chmodSync(place(file), 0o755);
    }
    // Neither a program nor a plain file.
    writeFileSync(place('one/clang'), '');
    mkdirSync(place('one/cc'));
  });
  afterAll(() => rmSync(folder, { recursive: true }));

  it('is cc rather than gcc, wherever they stand', () => {
    const PATH = `${place('one')}:${place('two')}`;
    expect(findCompiler({ PATH })).toEqual({ command: [place('two/cc')] });
  });

  it('is what can be run only', () => {
    expect(findCompiler({ PATH: place('one') })).toEqual({ command: [place('one/gcc')] });
  });

  it('is what CC names, with its options', () => {
    const PATH = place('two');
    expect(findCompiler({ PATH, CC: ' mine  -m32 ' })).toEqual({
      command: [place('two/mine'), '-m32'],
    });
    expect(findCompiler({ PATH: '', CC: place('two/mine') })).toEqual({
      command: [place('two/mine')],
    });
  });

  it('is missing where CC names none, even if there is another', () => {
    expect(findCompiler({ PATH: place('two'), CC: '/nonexistent' })).toEqual({
      missing: 'CC names /nonexistent, which is no program that can be run',
    });
  });

  it('is missing where none of the usual names is on PATH', () => {
    const missing = 'no C compiler was found: none of cc, gcc, clang is on PATH; CC can name one';
    expect(findCompiler({ PATH: place('empty') })).toEqual({ missing });
    expect(findCompiler({})).toEqual({ missing });
  });
});
