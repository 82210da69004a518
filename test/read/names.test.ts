import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { EMPTY_HASH, hashMultipliers, NameTable } from '../../compiler/read/names.js';

describe('NameTable', () => {
  it('the empty name is 0', () => {
    const names = new NameTable();
    expect(names.internText('')).toBe(0);
    expect(names.text(0)).toBe('');
    expect(names.count).toBe(1);
  });

  it('a name keeps its id, and another gets the next', () => {
    const names = new NameTable();
    expect(['a', 'b', 'a', 'ab', 'b'].map((name) => names.internText(name))).toEqual([
      1, 2, 1, 3, 2,
    ]);
  });

  it('ids and names belong to each other, also when the table has grown', () => {
    fc.assert(
      fc.property(fc.uniqueArray(fc.string({ unit: 'grapheme' }), { maxLength: 40 }), (texts) => {
        const names = new NameTable(1);
        const many = Array.from({ length: 3000 }, (_, i) => `n${i}`);
        const all = [...texts, ...many];
        const ids = all.map((text) => names.internText(text));
        expect(ids.map((id) => names.text(id))).toEqual(all);
        expect(all.map((text) => names.internText(text))).toEqual(ids);
        expect(new Set(ids).size).toBe(new Set(all).size);
      }),
      { seed: 1364, numRuns: 20 },
    );
  });

  it('numbered names of many families are told apart', () => {
    const names = new NameTable(1);
    const families = ['n', 'm', 'U', 'a_', 'b_0', 'u1/n_', 'q[', 'r_reg[', 'x1y2_', ''];
    const texts = families.flatMap((family) =>
      Array.from({ length: 2000 }, (_, i) => `${family}${i}${family.endsWith('[') ? ']' : ''}`),
    );
    const ids = texts.map((text) => names.internText(text));
    expect(new Set(ids).size).toBe(new Set(texts).size);
    expect(texts.map((text) => names.internText(text))).toEqual(ids);
    expect(ids.map((id) => names.text(id))).toEqual(texts);
  });

  it('a part of a text is a name, with its hash or without', () => {
    const names = new NameTable();
    const bytes = new TextEncoder().encode('xxabcxx');
    let hash = EMPTY_HASH;
    for (const byte of bytes.subarray(2, 5)) {
      hash = (Math.imul(hash, hashMultipliers[byte]!) + byte) | 0;
    }
    const id = names.internHashed(bytes, 2, 5, hash);
    expect(names.text(id)).toBe('abc');
    expect(names.intern(bytes, 2, 5)).toBe(id);
  });
});
