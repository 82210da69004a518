import { describe, expect, it } from 'vitest';
import { wordAt, wordCount, wordNamed } from '../../../runtime/page/signals.js';

const memory = {
  name: 'a.m',
  width: 12,
  indices: [
    { low: 1, size: 3 },
    { low: 8, size: 5 },
  ],
  from: 0,
};

describe('words of a memory with two indices', () => {
  it('have names that lead back to them, the last index counting fastest', () => {
    const names = Array.from({ length: wordCount(memory) }, (_, i) => wordAt(memory, i).name);
    expect(names.length).toBe(15);
    expect(new Set(names).size).toBe(15);
    expect(names.slice(0, 6)).toEqual([
      'a.m[1][8]',
      'a.m[1][9]',
      'a.m[1][10]',
      'a.m[1][11]',
      'a.m[1][12]',
      'a.m[2][8]',
    ]);
    for (const [i, name] of names.entries()) {
      expect(wordNamed([memory], name)).toEqual(wordAt(memory, i));
    }
  });

  it.each(['a.m', 'a.m[1]', 'a.m[0][8]', 'a.m[1][13]', 'a.m[4][8]', 'a.m[1][8][0]', 'a.m[1][8]x'])(
    'are not what %s names',
    (name) => {
      expect(wordNamed([memory], name)).toBeUndefined();
    },
  );

  it('do not stand between two', () => {
    expect(wordNamed([memory], 'a.m[1][8.5]')).toBeUndefined();
  });
});

describe('words of a memory with negative indices', () => {
  it('have names that lead back to them', () => {
    const below = { name: 'm', width: 8, indices: [{ low: -2, size: 4 }], from: 0 };
    const names = Array.from({ length: wordCount(below) }, (_, i) => wordAt(below, i).name);
    expect(names).toEqual(['m[-2]', 'm[-1]', 'm[0]', 'm[1]']);
    for (const [i, name] of names.entries()) {
      expect(wordNamed([below], name)).toEqual(wordAt(below, i));
    }
    expect(wordNamed([below], 'm[-3]')).toBeUndefined();
  });
});
