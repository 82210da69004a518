import { describe, expect, test } from 'vitest';
import { prbs, sequences } from '../../../benchmarks/circuits/prbs.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

// The polynomials, and the inversion of the line signal, are those of ITU-T O.150 (from memory).
const exponents = sequences.map(({ order, tap }) => [order, tap] as const);

/** Multiplies polynomials over GF(2) modulo x^order + x^tap + 1. */
function multiply(a: bigint, b: bigint, order: number, tap: number): bigint {
  let product = 0n;
  for (let power = a, rest = b; rest > 0n; rest >>= 1n) {
    if (rest & 1n) product ^= power;
    power <<= 1n;
    if (power >> BigInt(order)) power ^= (1n << BigInt(order)) | (1n << BigInt(tap)) | 1n;
  }
  return product;
}

function powerOfX(exponent: number, order: number, tap: number): bigint {
  let power = 1n;
  for (const digit of exponent.toString(2)) {
    power = multiply(power, power, order, tap);
    if (digit === '1') power = multiply(power, 2n, order, tap);
  }
  return power;
}

function primeFactors(value: number): number[] {
  const factors: number[] = [];
  let rest = value;
  for (let p = 2; p * p <= rest; p++) {
    if (rest % p === 0) factors.push(p);
    while (rest % p === 0) rest /= p;
  }
  return rest > 1 ? [...factors, rest] : factors;
}

describe('the bit sequences', () => {
  test.each(exponents)('x^%i + x^%i + 1 gives the full period', (order, tap) => {
    const period = 2 ** order - 1;
    expect(powerOfX(period, order, tap)).toBe(1n);
    for (const p of primeFactors(period)) {
      expect(powerOfX(period / p, order, tap)).not.toBe(1n);
    }
  });

  test.each([7, 9, 15])('order %i passes every state but zero once a period', (order) => {
    const generator = evaluate(verilog(prbs(order)));
    const states = new Set<bigint>();
    let ones = 0;
    for (let cycle = 0; cycle < 2 ** order - 1; cycle++) {
      states.add(generator.get('state'));
      ones += Number(generator.get('serial'));
      generator.clock();
    }
    expect(states.size).toBe(2 ** order - 1);
    expect(states.has(0n)).toBe(false);
    expect(generator.get('state')).toBe(2n ** BigInt(order) - 1n);
    const inverted = order === 15;
    expect(ones).toBe(inverted ? 2 ** (order - 1) - 1 : 2 ** (order - 1));
  });

  test.each([
    [7, 6, false],
    [9, 5, false],
    [15, 14, true],
    [20, 3, false],
    [23, 18, true],
    [31, 28, true],
  ])(
    'order %i sends each bit as the sum of those %i and the order before',
    (order, tap, inverted) => {
      const generator = evaluate(verilog(prbs(order)));
      const line = Array.from({ length: 500 }, () => {
        const bit = Number(generator.get('serial'));
        generator.clock();
        return inverted ? 1 - bit : bit;
      });
      expect(line.slice(0, order)).toEqual(new Array(order).fill(1));
      for (let i = order; i < line.length; i++) {
        expect(line[i]).toBe(line[i - tap]! ^ line[i - order]!);
      }
    },
  );

  test('an order without a sequence is refused', () => {
    expect(() => prbs(8)).toThrow('expected order to be one of 7, 9, 15, 20, 23, 31, got 8');
  });
});
