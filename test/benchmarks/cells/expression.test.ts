import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  expression,
  pinsRead,
  substituted,
  truthTable,
} from '../../../benchmarks/circuits/cells/expression.js';
import { dialects, libertyFunction } from '../../../benchmarks/circuits/cells/liberty/functions.js';
import { assigned } from '../../../benchmarks/circuits/cells/verilog/gates.js';

describe('expressions of cells', () => {
  test('are read from their short form', () => {
    expect(expression('nor (and a0 a1) b')).toEqual(['nor', ['and', 'a0', 'a1'], 'b']);
    expect(expression('a')).toBe('a');
    expect(pinsRead(expression('mux s1 (mux s0 a b) (not s0)'))).toEqual(['s1', 's0', 'a', 'b']);
    expect(() => expression('both a b')).toThrow('expected an operator of buf, not');
  });

  test('take expressions in place of pins', () => {
    const given = substituted(expression('mux en state d'), { state: ['not', 'q'] });
    expect(given).toEqual(expression('mux en (not q) d'));
  });

  test.each([
    ['and a b', 0b1000n],
    ['nand a b', 0b0111n],
    ['or a (not b)', 0b1011n],
    ['nor a b', 0b0001n],
    ['xor a b', 0b0110n],
    ['xnor a b', 0b1001n],
    ['mux a b (not b)', 0b0110n],
    ['1', 0b1111n],
  ])('%s has its truth table', (text, table) => {
    expect(truthTable(expression(text), ['a', 'b'])).toBe(table);
  });

  test('refuse pins that the table has no column for', () => {
    expect(() => truthTable('c', ['a', 'b'])).toThrow('expected one of a,b, got c');
  });

  test('mean the same as a Verilog expression', () => {
    const { tree } = fc.letrec<{ tree: ReturnType<typeof expression> }>((tie) => ({
      tree: fc.oneof(
        { depthSize: 'small' },
        fc.constantFrom('a', 'b', 'c'),
        fc.tuple(fc.constantFrom('not', 'buf'), tie('tree')),
        fc.tuple(
          fc.constantFrom('and', 'nand', 'or', 'nor', 'xor', 'xnor'),
          tie('tree'),
          tie('tree'),
        ),
        fc.tuple(fc.constant('mux'), tie('tree'), tie('tree'), tie('tree')),
      ) as fc.Arbitrary<ReturnType<typeof expression>>,
    }));
    fc.assert(
      fc.property(tree, (given) => {
        const text = assigned(given);
        // Verilog and JavaScript write these operators alike, but for values of one bit.
        const value = new Function('a', 'b', 'c', `return (${text}) & 1`) as (
          ...bits: number[]
        ) => number;
        const table = truthTable(given, ['a', 'b', 'c']);
        for (let row = 0; row < 8; row++) {
          const bits = [0, 1, 2].map((k) => (row >> k) & 1);
          if (text.includes('?')) continue;
          expect(BigInt(value(...bits))).toBe((table >> BigInt(row)) & 1n);
        }
      }),
      { seed: 9, numRuns: 300 },
    );
  });

  test('are spelled in Liberty as each dialect has it', () => {
    const given = expression('nor (and a b) (not c)');
    expect(dialects.map((dialect) => libertyFunction(given, dialect))).toEqual([
      '!((a & b) | (!c))',
      "((a*b)+(c'))'",
      "((a b) + (c'))'",
      '!((a * b) | (!c))',
    ]);
  });
});
