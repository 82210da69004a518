import { describe, expect, it } from 'vitest';
import { ALL } from '../../../compiler/passes/rewriteCuts/functions.js';
import { Structures } from '../../../compiler/passes/rewriteCuts/structures.js';

const structures = new Structures();

describe('Structures', () => {
  it('needs as many operations as is known', () => {
    // How many of the functions of four variables have a formula of which length at the least:
    // D. Knuth, The Art of Computer Programming, volume 4A, section 7.1.2, table 1.
    const counts = new Array<number>(6).fill(0);
    for (let table = 0; table <= ALL; table++) {
      const cost = structures.cost(table);
      if (cost !== undefined) counts[cost]!++;
    }
    expect(counts).toEqual([10, 60, 456, 2474, 10624, 24184]);
  });

  it('gives structures that are the function, without a detour', () => {
    let count = 0;
    for (let table = 0; table <= ALL; table++) {
      const cost = structures.cost(table);
      const known = structures.of(table);
      expect(known.length > 0).toBe(cost !== undefined && cost > 0);
      for (const { isXor, left, right, inverted } of known) {
        const value = (isXor ? left ^ right : left & right) ^ (inverted ? ALL : 0);
        const operations = structures.cost(left)! + structures.cost(right)! + 1;
        if (value !== table || operations !== cost) expect.fail(`structure of ${table}`);
        count++;
      }
    }
    expect(count).toBeGreaterThan(37_808);
  });
});
