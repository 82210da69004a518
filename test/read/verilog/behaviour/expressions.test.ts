import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import type { Diagnostic } from '../../../../compiler/diagnostics/diagnostics.js';
import { bench, constantOf, problemsOf } from './bench.js';
import { knownValue, shape } from './evaluator.js';
import { operands, textOf, tree } from './randomExpression.js';

const declarations = operands
  .map(({ name, width, signed }) => `input ${signed ? 'signed' : ''} [${width - 1}:0] ${name};`)
  .join('\n');

const inputs = fc.record(
  Object.fromEntries(
    operands.map(({ name, width }) => {
      const near = fc.bigInt(-4n, 4n).map((value) => BigInt.asUintN(width, value));
      return [name, fc.oneof(fc.bigInt(0n, (1n << BigInt(width)) - 1n), near)];
    }),
  ),
);

const errorsOf = (diagnostics: readonly Diagnostic[]): readonly Diagnostic[] =>
  diagnostics.filter(({ severity }) => severity === 'error');

describe('random expressions', () => {
  it('have the value that clause 5 gives them, as gates', () => {
    let compared = 0;
    const trial = fc.record({ tree, rows: fc.array(inputs, { minLength: 5, maxLength: 5 }) });
    fc.assert(
      fc.property(trial, fc.integer({ min: 1, max: 14 }), ({ tree: t, rows }, width) => {
        const expected = rows.map((row) => knownValue(t, row, width));
        if (expected.every((value) => value === undefined)) return;
        const text = `${declarations} wire [${width - 1}:0] y; assign y = ${textOf(t)};`;
        const { simulate, diagnostics } = bench(text);
        expect(errorsOf(diagnostics)).toEqual([]);
        const simulation = simulate();
        for (const [i, row] of rows.entries()) {
          const value = expected[i];
          if (value === undefined) continue;
          simulation.set(row);
          expect(simulation.bits('y')).toBe(value.toString(2).padStart(width, '0'));
          compared++;
        }
      }),
      { seed: 20, numRuns: 500 },
    );
    expect(compared).toBeGreaterThan(1000);
  });

  it('have the same value as constants', () => {
    fc.assert(
      fc.property(tree, inputs, (t, row) => {
        const { width, signed } = shape(t);
        const value = knownValue(t, row, width);
        if (value === undefined) return;
        const parameters = operands.map((operand) => {
          const sign = operand.signed ? 's' : '';
          const bits = row[operand.name]!.toString(16);
          return `parameter ${operand.name} = ${operand.width}'${sign}h${bits};`;
        });
        const { constant, diagnostics } = constantOf(textOf(t), parameters.join('\n'));
        expect(errorsOf(diagnostics)).toEqual([]);
        expect(constant).toEqual({ width, signed, value, unknown: 0n });
      }),
      { seed: 21, numRuns: 500 },
    );
  });
});

/** Value of `y` for given inputs, as bits. */
function yOf(items: string, inputs: Readonly<Record<string, number | string>>): string {
  const { simulate, diagnostics } = bench(items);
  expect(errorsOf(diagnostics)).toEqual([]);
  const simulation = simulate();
  simulation.set(inputs);
  return simulation.bits('y');
}

describe('expressions', () => {
  it('read as x outside of a declaration (5.2.1)', () => {
    const items = 'input [2:0] i; input [4:1] v; wire [1:0] y;';
    expect(yOf(`${items} assign y = v[i];`, { v: 0b1010, i: 4 })).toBe('01');
    expect(yOf(`${items} assign y = v[i];`, { v: 0b1010, i: 0 })).toBe('0x');
    expect(yOf(`${items} assign y = v[i];`, { v: 0b1010, i: 5 })).toBe('0x');
    expect(yOf(`${items} assign y = v[i +: 2];`, { v: 0b1010, i: 4 })).toBe('x1');
    expect(yOf(`${items} assign y = v[i -: 2];`, { v: 0b1010, i: 1 })).toBe('0x');
    expect(yOf(`${items} assign y = v[5:4];`, { v: 0b1010 })).toBe('x1');
    expect(yOf(`${items} assign y = v[3'bx];`, { v: 0b1010 })).toBe('0x');
  });

  it('select with signed indexes in declarations that reach below zero', () => {
    const items = 'input signed [2:0] i; input [2:-3] v; wire [1:0] y;';
    for (const [i, y] of [
      [0b101, '01'], // -3
      [0b111, '00'], // -1
      [0b010, '01'],
      [0b011, '0x'],
    ] as const) {
      expect(yOf(`${items} assign y = v[i];`, { v: 0b100001, i })).toBe(y);
    }
  });

  it('divide every signed value by every constant toward zero (5.1.5)', () => {
    const divisors = [...Array(16).keys()].map((i) => i - 8).filter((divisor) => divisor !== 0);
    const outputs = divisors.map((divisor, i) => {
      const constant = `${divisor < 0 ? '-' : ''}5'sd${Math.abs(divisor)}`;
      return `wire signed [6:0] q${i}, r${i}; assign q${i} = a / ${constant}, r${i} = a % ${constant};`;
    });
    const simulation = bench(`input signed [4:0] a; ${outputs.join('\n')}`).simulate();
    for (let a = -16; a < 16; a++) {
      simulation.set({ a: a & 31 });
      for (const [i, divisor] of divisors.entries()) {
        const both = [simulation.number(`q${i}`), simulation.number(`r${i}`)];
        expect([a, divisor, ...both]).toEqual([
          ...[a, divisor, Math.trunc(a / divisor) & 127, (a % divisor) & 127],
        ]);
      }
    }
  });

  it('give x for a division by a signal that is zero (5.1.5)', () => {
    const items = 'input [3:0] a, b; wire [3:0] y;';
    expect(yOf(`${items} assign y = a / b;`, { a: 9, b: 0 })).toBe('xxxx');
    expect(yOf(`${items} assign y = a % b;`, { a: 9, b: 0 })).toBe('xxxx');
  });

  it('raise 2 to signals, and signals to small constants', () => {
    const items = 'input [2:0] a; input signed [2:0] s; wire [7:0] y;';
    expect(yOf(`${items} assign y = 2 ** a;`, { a: 5 })).toBe('00100000');
    expect(yOf(`${items} assign y = 2 ** s;`, { s: 7 })).toBe('00000000');
    expect(yOf(`${items} assign y = 8'd2 ** s;`, { s: 2 })).toBe('00000100');
    expect(yOf(`${items} assign y = a ** 3;`, { a: 5 })).toBe('01111101');
    expect(yOf(`${items} assign y = a ** 0;`, { a: 5 })).toBe('00000001');
  });

  it('pass x on as the gate tables do', () => {
    const items = 'input [3:0] a, b; wire [3:0] y;';
    expect(yOf(`${items} assign y = a & b;`, { a: '0x0x', b: '00x1' })).toBe('000x');
    expect(yOf(`${items} assign y = a == b;`, { a: '0x01', b: '1x01' })).toBe('0000');
    expect(yOf(`${items} assign y = a[0] ? b : ~b;`, { a: 'xxxx', b: 9 })).toBe('xxxx');
    expect(yOf(`${items} assign y = a[0] ? b : b | 1;`, { a: 'xxxx', b: 8 })).toBe('100x');
  });

  it('call functions that read signals of the module', () => {
    const items = `input [3:0] a, b; wire [3:0] y;
      function [3:0] more(input [3:0] v); more = v + b; endfunction
      assign y = more(more(a));`;
    expect(yOf(items, { a: 1, b: 4 })).toBe('1001');
  });

  it('may be thousands of operators long', () => {
    const terms = Array.from({ length: 6000 }, (_, i) => `a[${i % 8}]`);
    expect(yOf(`input [7:0] a; wire y; assign y = ${terms.join(' ^ ')};`, { a: 7 })).toBe('0');
    expect(yOf(`input [7:0] a; wire y; assign y = ${terms.join(' && ')};`, { a: 255 })).toBe('1');
    const choices = Array.from({ length: 2000 }, (_, i) => `a == ${i} ? ${i} : `).join('');
    expect(yOf(`input [9:0] a; wire [9:0] y; assign y = ${choices} 0;`, { a: 777 })).toBe(
      '1100001001',
    );
  });

  const sizes: readonly (readonly [string, number])[] = [
    ['a + b', 35],
    ['a - b', 43],
    ['a + 1', 15],
    ['a * 5', 31],
    ['a << 3', 0],
    ['a << b[2:0]', 27],
    ['a == b', 9],
    ["a == 8'hA5", 5],
    ['a < b', 16],
    ['c ? a : b', 8],
    ['a[b[2:0]]', 7],
    ['a / 16', 0],
    ['&a', 1],
    ["a & 8'hF0", 0],
  ];
  it.each(sizes)('%s takes at most %i gates', (text, limit) => {
    const { circuit } = bench(`input [7:0] a, b; input c; wire [7:0] y; assign y = ${text};`);
    expect(circuit.kind.filter((kind) => kind > GateKind.Buf).length).toBeLessThanOrEqual(limit);
  });

  const refusals: readonly (readonly [string, string, string])[] = [
    ["a === 4'b1x", 'not-supported', "a === 4'b1x"],
    ["4'bz !== a", 'not-supported', "4'bz !== a"],
    ['a ** b', 'not-supported', 'a ** b'],
    ['w / b', 'not-supported', 'w / b'],
    ['$random + a', 'not-supported', '$random'],
    ['$clog2(a)', 'constant-required', 'a'],
    ['a + 1.5', 'not-supported', '1.5'],
    ['{a, 1}', 'range-invalid', '1'],
    ['{b{a}}', 'constant-required', 'b'],
    ['a[b:0]', 'constant-required', 'b'],
    ['a[1 +: b]', 'constant-required', 'b'],
    ['a[0:1]', 'range-invalid', 'a[0:1]'],
    ['a[1 +: 0]', 'range-invalid', '0'],
    ['c[0]', 'range-invalid', 'c'],
    ['a[1][0]', 'range-invalid', 'a[1]'],
    ['a[7]', 'select-outside', 'a[7]'],
    ['f(a, b)', 'argument-count', 'f(a, b)'],
    ['g(a)', 'name-undeclared', 'g(a)'],
    ['r(a)', 'loop-unbounded', 'r(v - 1)'],
    ['a + none[2]', 'name-undeclared', 'none'],
  ];
  it.each(refusals)('%s gives %s at the place', (text, code, at) => {
    const problems = problemsOf(`
      input [3:0] a, b; input c; input [199:0] w; wire [3:0] y;
      function f(input v); f = v; endfunction
      function automatic [3:0] r(input [3:0] v); r = v == 0 ? 0 : r(v - 1); endfunction
      assign y = ${text};`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([[code, at]]);
  });
});
