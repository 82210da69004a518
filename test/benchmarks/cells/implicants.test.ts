import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { primeImplicants } from '../../../benchmarks/circuits/cells/verilog/implicants.js';

const covers = (cube: string, row: number): boolean =>
  [...cube].every((digit, k) => digit === '?' || Number(digit) === ((row >> k) & 1));

describe('prime implicants', () => {
  test('cover the ones of a table and nothing else, and none can be wider', () => {
    fc.assert(
      fc.property(fc.bigInt({ min: 0n, max: 0xffffn }), (table) => {
        const cubes = primeImplicants(table, 4);
        const rows = Array.from({ length: 16 }, (_, row) => row);
        const isOne = (row: number) => ((table >> BigInt(row)) & 1n) === 1n;
        for (const row of rows) expect(cubes.some((cube) => covers(cube, row))).toBe(isOne(row));
        for (const cube of cubes) {
          for (const [place, digit] of [...cube].entries()) {
            if (digit === '?') continue;
            const wider = `${cube.slice(0, place)}?${cube.slice(place + 1)}`;
            expect(rows.some((row) => covers(wider, row) && !isOne(row))).toBe(true);
          }
        }
      }),
      { seed: 4, numRuns: 300 },
    );
  });

  test('of a multiplexer have a row for equal data', () => {
    // Inputs: select, a, b.
    expect(primeImplicants(0b11100100n, 3).sort()).toEqual(['01?', '1?1', '?11']);
  });
});
