import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bench } from './bench.js';
import { type Process, processes, step, type Values } from './randomProcess.js';

const rows = fc.array(fc.record({ a: fc.nat(7), b: fc.nat(7) }), { minLength: 6, maxLength: 6 });
const declarations = 'input clk; input [2:0] a, b; reg [2:0] p, q, r, s;';
const names = ['p', 'q', 'r', 's'] as const;
const start = { p: 1, q: 2, r: 3, s: 4 };
const initial = 'initial begin p = 1; q = 2; r = 3; s = 4; end';

/** A value as bits, with x for z. */
function bitsOf(value: number): string {
  return [2, 1, 0].map((bit) => ((value >> bit) & 8 ? 'x' : (value >> bit) & 1)).join('');
}

function checkClocked(process: Process, inputs: readonly { a: number; b: number }[]): void {
  const { simulate, diagnostics } = bench(`${declarations} ${initial}
    always @(posedge clk) ${process.text}`);
  expect(diagnostics.filter(({ code }) => code !== 'select-outside')).toEqual([]);
  const simulation = simulate();
  const values: Values = { ...start };
  for (const row of inputs) {
    simulation.set({ clk: 0, ...row });
    Object.assign(values, row);
    step(process, values);
    simulation.tick();
    for (const name of names)
      expect([name, simulation.bits(name)]).toEqual([name, bitsOf(values[name]!)]);
  }
}

describe('random processes', () => {
  it('step as their statements say, at a clock edge', () => {
    const targets = { p: { by: '<=' }, q: { by: '<=' }, r: { by: '=' }, s: { by: '=' } } as const;
    const statement = processes(targets, ['a', 'b', ...names]);
    fc.assert(fc.property(statement, rows, checkClocked), { seed: 60, numRuns: 100 });
  });

  it('assign a variable in both ways at one edge', () => {
    const targets = { p: { by: 'either' }, q: { by: 'either' }, s: { by: '=' } } as const;
    const statement = processes(targets, ['a', 'b', ...names]);
    fc.assert(fc.property(statement, rows, checkClocked), { seed: 62, numRuns: 100 });
  });

  it('let registers be z', () => {
    const targets = { p: { by: '<=', z: true }, q: { by: 'either', z: true }, r: { by: '=' } };
    const statement = processes(targets as Parameters<typeof processes>[0], ['a', 'b', 'r', 's']);
    fc.assert(fc.property(statement, rows, checkClocked), { seed: 63, numRuns: 100 });
  });

  it.each([
    ['pass and keep values as their statements say', 61, false],
    ['pass and keep z', 64, true],
  ])('%s, level-sensitively', (_, seed, z) => {
    const targets = {
      p: { by: '=' },
      q: { by: '<=', ...(z && { z }) },
      r: { by: '=', ...(z && { z }) },
    };
    const statement = processes(targets as Parameters<typeof processes>[0], ['a', 'b']);
    const property = fc.property(statement, rows, (process, inputs) => {
      const { simulate } = bench(`${declarations} ${initial} always @* ${process.text}`);
      const simulation = simulate();
      const values: Values = { ...start };
      for (const row of inputs) {
        simulation.set({ ...row });
        Object.assign(values, row);
        step(process, values);
        for (const name of names) {
          const bits = bitsOf(values[name]!);
          const shown = simulation.bits(name);
          // A latch may have let x through before the first inputs, and hold it.
          const known = [...shown].map((bit, i) => (bit === 'x' ? 'x' : bits[i])).join('');
          expect([name, shown]).toEqual([name, known]);
          for (const [i, bit] of [...bits].entries()) if (bit === 'x') expect(shown[i]).toBe('x');
        }
      }
    });
    fc.assert(property, { seed, numRuns: 100 });
  });
});
