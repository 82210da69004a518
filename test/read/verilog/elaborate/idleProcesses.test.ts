import { describe, expect, it } from 'vitest';
import { reading } from './reading.js';

/** Registers and gates of a text, and the codes of what is said about it. */
function read(items: string) {
  const text = `module t (input clk, d, output reg q);\n${items}\nendmodule`;
  const { circuit, diagnostics } = reading(text);
  const codes = diagnostics.list.map(({ code }) => code);
  return { registers: circuit?.registers.count, memories: circuit?.memories.length, codes };
}

const register = 'always @(posedge clk) q <= d;';

describe('a process that waits for a notifier', () => {
  it.each([
    ['that nothing assigns', "reg n; always @(n) q = 1'bx;"],
    ['that only starts with a value', "reg n; initial n = 0; always @(n) q <= 1'bx;"],
    ['that is declared with a value', "reg n = 0; always @(n) begin q = 'bx; end"],
    ['or another one', "reg n, m; always @(n or m) q = 1'bx;"],
    ['that is nobody else, whatever it assigns', 'reg n; always @(posedge n) q <= 0;'],
    [
      'that timing checks would change',
      "reg n; always @(n) q = 1'bx; specify $setup(d, posedge clk, 1, n); endspecify",
    ],
  ])('%s takes no part', (_, process) => {
    expect(read(`${register} ${process}`)).toEqual({ registers: 1, memories: 0, codes: [] });
  });

  it('leaves a memory alone', () => {
    const items = `reg [7:0] m [0:63]; reg [5:0] a; reg n;
      always @(posedge clk) begin a <= {a, d}; m[a] <= {8{d}}; q <= ^m[a]; end
      always @(n) m[a] = 8'bx;`;
    expect(read(items)).toEqual({ registers: 7, memories: 1, codes: [] });
  });

  it.each([
    [
      'a variable that a process assigns',
      "reg n; always @(posedge clk) n <= d; always @(n) q = 1'bx;",
    ],
    [
      'a variable that a task assigns',
      "reg n; task f; n = d; endtask always @* f; always @(n) q = 1'bx;",
    ],
    ['a net', "wire n; always @(n) q = 1'bx;"],
    ['what only starts with a value', 'reg n; initial n = 0; always @(n) q = 0;'],
  ])('is told from one that waits for %s', (_, process) => {
    expect(read(`${register} ${process}`).codes).toContain('net-multiply-driven');
  });
});
