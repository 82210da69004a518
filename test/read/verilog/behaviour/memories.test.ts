import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bench, problemsOf } from './bench.js';

describe('a memory', () => {
  it('is written at the clock edge and read at a variable address', () => {
    const { circuit, simulate, diagnostics } = bench(`
      input clk, we; input [2:0] wa, ra; input [7:0] d; wire [7:0] q;
      reg [7:0] m [0:7]; integer i;
      initial for (i = 0; i < 8; i = i + 1) m[i] = i * 3;
      always @(posedge clk) if (we) m[wa] <= d;
      assign q = m[ra];
    `);
    expect(diagnostics).toEqual([]);
    expect(circuit.registers.count).toBe(64);
    const address = fc.nat(7);
    const row = fc.record({ we: fc.nat(1), wa: address, ra: address, d: fc.nat(255) });
    fc.assert(
      fc.property(fc.array(row), (rows) => {
        const simulation = simulate();
        const model = Array.from({ length: 8 }, (_, i) => i * 3);
        for (const inputs of rows) {
          simulation.set({ clk: 0, ...inputs });
          expect(simulation.number('q')).toBe(model[inputs.ra]);
          simulation.tick();
          if (inputs.we) model[inputs.wa] = inputs.d;
          expect(simulation.number('q')).toBe(model[inputs.ra]);
        }
      }),
      { seed: 50, numRuns: 20 },
    );
  });

  it('shifts and copies words within one edge', () => {
    const simulation = bench(`
      input clk; input [3:0] d; reg [3:0] m [3:0]; wire [3:0] last; integer i;
      always @(posedge clk) begin
        for (i = 3; i > 0; i = i - 1) m[i] <= m[i - 1];
        m[0] <= d;
      end
      assign last = m[3];
    `).simulate();
    simulation.set({ clk: 0 });
    for (const d of [1, 2, 3, 4, 5]) {
      simulation.set({ d });
      simulation.tick();
    }
    expect(simulation.number('last')).toBe(2);
  });

  it('reads as x at an address that it does not have', () => {
    const simulation = bench(`
      input [2:0] a; wire [1:0] y; reg [1:0] m [1:5];
      assign y = m[a];
      always @* begin m[1] = 0; m[2] = 1; m[3] = 2; m[4] = 3; m[5] = 0; end
    `).simulate();
    for (const [a, y] of [
      [0, 'xx'],
      [1, '00'],
      [4, '11'],
      [6, 'xx'],
      [7, 'xx'],
    ] as const) {
      simulation.set({ a });
      expect(simulation.bits('y')).toBe(y);
    }
  });

  it('may be written in parts of a word', () => {
    const simulation = bench(`
      input clk, h; input a; input [3:0] d; wire [7:0] q; reg [7:0] m [0:1];
      initial begin m[0] = 8'h12; m[1] = 8'h34; end
      always @(posedge clk) if (h) m[a][7:4] <= d; else m[a][3:0] <= d;
      assign q = m[1];
    `).simulate();
    simulation.set({ clk: 0, h: 1, a: 1, d: 9 });
    simulation.tick();
    simulation.set({ h: 0, a: 0 });
    simulation.tick();
    expect(simulation.number('q')).toBe(0x94);
  });

  it.each([
    ['q = m[a];', 'not-supported', 'm[a]'],
    ['m[a] = q;', 'not-supported', 'm[a]'],
    ['q = m;', 'range-invalid', 'm'],
    ['m = q;', 'target-invalid', 'm'],
    ['q = m[1][9];', 'select-outside', 'm[1][9]'],
    ['m[-1] = q;', 'select-outside', 'm[-1]'],
  ])('of 131072 bits: %s gives %s at the place', (text, code, at) => {
    const problems = problemsOf(
      `input [13:0] a; reg [7:0] m [0:16383]; reg [7:0] q; always @* begin q = 0; ${text} end`,
    );
    expect(problems.map((problem) => [problem.code, problem.at])).toContainEqual([code, at]);
  });
});
