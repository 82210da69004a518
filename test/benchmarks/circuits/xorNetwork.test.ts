import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Module } from '../../../benchmarks/circuits/netlistWriter.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { matrixOf, shareSums, xorNetwork } from '../../../benchmarks/circuits/xorNetwork.js';
import { evaluate } from './evaluate.js';

const byte = fc.integer({ min: 0, max: 255 });

describe('a network of sums', () => {
  test('multiplies by its matrix, in no more gates than row by row', () => {
    const row = fc.uniqueArray(fc.nat(7), { minLength: 1, maxLength: 8 });
    fc.assert(
      fc.property(fc.array(row, { minLength: 1, maxLength: 12 }), byte, (matrix, value) => {
        const m = new Module('network');
        m.output('y', xorNetwork(m, matrix, m.inputs('x', 8)));
        const evaluator = evaluate(verilog(m));
        evaluator.set('x', value);
        const sums = matrix.map((r) => r.reduce((sum, i) => sum ^ ((value >> i) & 1), 0));
        expect(evaluator.get('y')).toBe(BigInt(`0b${sums.toReversed().join('')}`));
        const alone = matrix.reduce((count, r) => count + r.length - 1, 0);
        expect(m.size().gates).toBeLessThanOrEqual(alone);
      }),
      { seed: 3, numRuns: 200 },
    );
  });

  test('makes a sum that two rows need once', () => {
    expect(
      shareSums(
        [
          [0, 1, 2],
          [0, 1, 3],
        ],
        4,
      ).steps,
    ).toHaveLength(3);
  });

  test('takes the matrix of a linear function from its values', () => {
    const swapNibbles = (x: number) => ((x << 4) | (x >> 4)) & 0xff;
    expect(matrixOf(swapNibbles, 8, 8)).toEqual([[4], [5], [6], [7], [0], [1], [2], [3]]);
  });
});
