import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { foldNames } from '../../../compiler/settle/text/foldNames.js';

const folded = (...names: string[]): string[] =>
  foldNames(names.map((name) => ({ name }))).map(({ name }) => name);

describe('names of bits', () => {
  it('of one vector are taken together, whatever their order', () => {
    expect(folded('q[0]', 'q[2]', 'a', 'q[1]', 'b')).toEqual(['q[2:0]', 'a', 'b']);
  });

  it('are taken together as far as their indices follow each other', () => {
    expect(folded('q[7]', 'q[6]', 'q[3]', 'q[1]', 'q[0]')).toEqual(['q[7:6]', 'q[3]', 'q[1:0]']);
  });

  it('are those of words, where a memory has two indices', () => {
    expect(folded('m[1][0]', 'm[1][1]', 'm[0][0]')).toEqual(['m[1][1:0]', 'm[0][0]']);
  });

  it('are not mixed with names without index', () => {
    expect(folded('q', 'q[0]', 'q[x]', '[0]')).toEqual(['q[0]', 'q', 'q[x]', '[0]']);
  });

  it('stand each in one vector, leftmost bit first', () => {
    const bit = fc.record({ base: fc.constantFrom('a', 'b.c', 'd[3]'), index: fc.nat(20) });
    fc.assert(
      fc.property(fc.uniqueArray(bit, { selector: (b) => `${b.base}[${b.index}]` }), (bits) => {
        const names = bits.map(({ base, index }) => `${base}[${index}]`);
        const vectors = foldNames(names.map((name) => ({ name })));
        const unfolded = vectors.flatMap(({ name, items }) => {
          const [, base, left, right] = /^(.*)\[(\d+)(?::(\d+))?\]$/.exec(name)!;
          const width = Number(left) - Number(right ?? left) + 1;
          expect(items).toHaveLength(width);
          return items.map((item, i) => {
            expect(item.name).toBe(`${base}[${Number(left) - i}]`);
            return item.name;
          });
        });
        expect(unfolded.sort()).toEqual(names.sort());
      }),
      { seed: 9, numRuns: 100 },
    );
  });
});
