import { describe, expect, it } from 'vitest';
import { bench, problemsOf } from './bench.js';

describe('the target of a continuous assignment', () => {
  it('may be bits, parts and concatenations with constant numbers', () => {
    const { simulate, diagnostics } = bench(`
      parameter N = 2;
      input [7:0] a; wire [7:0] y; wire [0:3] z; wire c;
      assign {c, y[N * 2 - 1:0]} = a[4:0];
      assign y[7] = a[0], y[N + 4 -: 3] = a[3:1];
      assign z[0:1] = a[1:0];
      assign z[2 +: 2] = a[7:6];
    `);
    expect(diagnostics).toEqual([]);
    const simulation = simulate();
    simulation.set({ a: 0b10110110 });
    expect(['c', 'y', 'z'].map((name) => simulation.bits(name))).toEqual(['1', '00110110', '1010']);
  });

  const refusals: readonly (readonly [string, string, string])[] = [
    ['v', 'target-invalid', 'v'],
    ['y[a]', 'target-invalid', 'y[a]'],
    ['P', 'target-invalid', 'P'],
    ['m[0]', 'target-invalid', 'm[0]'],
    ['c[0]', 'range-invalid', 'c'],
    ['y[0:3]', 'range-invalid', 'y[0:3]'],
    ['none', 'name-undeclared', 'none'],
    ['y[9:6]', 'select-outside', 'y[9:6]'],
  ];
  it.each(refusals)('%s gives %s at the place', (target, code, at) => {
    const problems = problemsOf(`
      parameter P = 1; input [1:0] a; wire [7:0] y; wire c; reg v; reg [1:0] m [0:1];
      assign ${target} = a;`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([[code, at]]);
  });
});

describe('the target of a procedural assignment', () => {
  const refusals: readonly (readonly [string, string, string])[] = [
    ['w = 1;', 'target-invalid', 'w'],
    ['P = 1;', 'target-invalid', 'P'],
    ['f = 1;', 'target-invalid', 'f'],
    ['v[9] = 1;', 'select-outside', 'v[9]'],
    ['v[0:1] = 1;', 'range-invalid', 'v[0:1]'],
    ['v[1][0] = 1;', 'range-invalid', 'v[1]'],
    ['c[0] = 1;', 'range-invalid', 'c'],
    ['g(1);', 'name-undeclared', 'g(1);'],
    ['t(1);', 'argument-count', 't(1);'],
    ['t(1, 2);', 'target-invalid', '2'],
    ['v = c[0];', 'range-invalid', 'c'],
    ['v = v[0][1];', 'range-invalid', 'v[0]'],
  ];
  it.each(refusals)('%s gives %s at the place', (text, code, at) => {
    const problems = problemsOf(`
      parameter P = 1; wire w; reg [7:0] v; reg c;
      function f(input x); f = x; endfunction
      task t(input x, output y); y = x; endtask
      always @* begin v = 0; c = 0; ${text} end`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([[code, at]]);
  });

  it('may lie partly outside of the declaration, which writes the rest', () => {
    const { simulate, diagnostics } = bench(`
      input [3:0] a; reg [3:0] y; always @* begin y = 0; y[5:2] = a; end`);
    expect(diagnostics.map(({ code }) => code)).toEqual(['select-outside']);
    const simulation = simulate();
    simulation.set({ a: 15 });
    expect(simulation.number('y')).toBe(0b1100);
  });
});
