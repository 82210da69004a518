import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bench } from './bench.js';
import { processes, type State } from './randomProcess.js';

const rows = fc.array(fc.record({ a: fc.nat(7), b: fc.nat(7) }), { minLength: 6, maxLength: 6 });
const declarations = 'input clk; input [2:0] a, b; reg [2:0] p, q, r, s;';
const names = ['p', 'q', 'r', 's'] as const;

describe('random processes', () => {
  it('step as their statements say, at a clock edge', () => {
    const statement = processes({ p: '<=', q: '<=', r: '=', s: '=' }, ['a', 'b', ...names]);
    fc.assert(
      fc.property(statement, rows, (process, inputs) => {
        const { simulate, diagnostics } = bench(`${declarations}
          initial begin p = 1; q = 2; r = 3; s = 4; end
          always @(posedge clk) ${process.text}`);
        expect(diagnostics.filter(({ code }) => code !== 'select-outside')).toEqual([]);
        const simulation = simulate();
        const now: Record<string, number> = { p: 1, q: 2, r: 3, s: 4 };
        for (const row of inputs) {
          simulation.set({ clk: 0, ...row });
          Object.assign(now, row);
          const state: State = { now, later: {} };
          process.run(state);
          Object.assign(now, state.later);
          simulation.tick();
          for (const name of names) {
            if (simulation.bits(name).includes('x')) continue; // Never assigned: no register.
            expect([name, simulation.number(name)]).toEqual([name, now[name]]);
          }
        }
      }),
      { seed: 60, numRuns: 250 },
    );
  });

  it('pass and keep values as their statements say, level-sensitively', () => {
    const statement = processes({ p: '=', q: '<=', r: '=' }, ['a', 'b']);
    fc.assert(
      fc.property(statement, rows, (process, inputs) => {
        const { simulate } = bench(`${declarations}
          initial begin p = 1; q = 2; r = 3; end
          always @* ${process.text}`);
        const simulation = simulate();
        const now: Record<string, number> = { p: 1, q: 2, r: 3 };
        const step = (row: { a: number; b: number }): void => {
          simulation.set(row);
          Object.assign(now, row);
          const state: State = { now, later: {} };
          process.run(state);
          Object.assign(now, state.later);
        };
        for (const row of inputs) {
          step(row);
          for (const name of ['p', 'q', 'r']) {
            // A latch may have let x through before the first inputs, and hold it.
            if (simulation.bits(name).includes('x')) continue;
            expect([name, simulation.number(name)]).toEqual([name, now[name]]);
          }
        }
      }),
      { seed: 61, numRuns: 250 },
    );
  });
});
