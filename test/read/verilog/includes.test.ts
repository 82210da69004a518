import { describe, expect, it } from 'vitest';
import { Source } from '../../../compiler/diagnostics/source.js';
import { includeReader } from '../../../compiler/read/verilog/includes.js';

const files: Readonly<Record<string, string>> = {
  'rtl/defs.v': 'beside',
  'lib/defs.v': 'first folder',
  'lib/cells.v': 'cells',
  'more/cells.v': 'second folder',
  '/abs/x.v': 'absolute',
  'plain.v': 'plain',
};

function find(path: string, from: string): string | undefined {
  const read = includeReader(['lib', 'more'], (name) => {
    const text = files[name];
    return text === undefined ? undefined : new TextEncoder().encode(text);
  });
  const source = read(path, new Source(from, ''));
  return source && `${source.path}: ${source.slice(0, source.bytes.length)}`;
}

describe('includeReader', () => {
  it('looks beside the including file first, then in the folders in order', () => {
    expect(find('defs.v', 'rtl/top.v')).toBe('rtl/defs.v: beside');
    expect(find('defs.v', 'other/top.v')).toBe('lib/defs.v: first folder');
    expect(find('cells.v', 'rtl/top.v')).toBe('lib/cells.v: cells');
    expect(find('plain.v', 'top.v')).toBe('plain.v: plain');
  });

  it('takes an absolute path as it is', () => {
    expect(find('/abs/x.v', 'rtl/top.v')).toBe('/abs/x.v: absolute');
  });

  it('finds nothing where there is nothing', () => {
    expect(find('no.v', 'rtl/top.v')).toBeUndefined();
  });

  it('reads a file once', () => {
    let reads = 0;
    const read = includeReader([], () => {
      reads++;
      return new Uint8Array(0);
    });
    const from = new Source('top.v', '');
    expect(read('a.v', from)).toBe(read('a.v', from));
    expect(reads).toBe(1);
  });
});
