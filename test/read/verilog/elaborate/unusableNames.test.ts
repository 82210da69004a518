import { describe, expect, it } from 'vitest';
import { reading } from './reading.js';

/** Code and message of each error of a module with some items. */
function messages(items: string): string[] {
  const { diagnostics } = reading(`module t (input a, output y); ${items} endmodule`);
  return diagnostics.list
    .filter(({ severity }) => severity === 'error')
    .map(({ code, message }) => `${code}: ${message}`);
}

describe('a name that is declared but cannot be used at a place', () => {
  it.each([
    ['real r; assign y = r;', 'not-supported', '`r` is a real number'],
    ['parameter real R = 1.5; assign y = R & a;', 'not-supported', '`R` is a real number'],
    ['event e; assign y = e;', 'not-supported', '`e` is a named event'],
    ['event e; reg q; always @(posedge e) q <= a;', 'not-supported', '`e` is a named event'],
    ['wire w; localparam P = w;', 'constant-required', '`w` is a signal, but a constant'],
    ['localparam P = a + 1;', 'constant-required', '`a` is a signal, but a constant'],
    ['localparam P = q[1]; reg [3:0] q;', 'constant-required', '`q` is a signal, but a constant'],
    ['real r; localparam P = r;', 'not-supported', '`r` is a real number'],
    ['localparam P = Q, Q = 1;', 'name-undeclared', '`Q` is declared only after this'],
    ['genvar i; assign y = i;', 'name-undeclared', '`i` is a genvar'],
    ['if (1) begin : g wire w; end assign y = g;', 'name-undeclared', '`g` is a block'],
    ['if (1) begin : g wire w; localparam P = w; end', 'constant-required', '`w` is a signal'],
    ['assign y = nothing & a;', 'name-undeclared', '`nothing` is not declared here'],
  ])('%s gives %s: %s', (items, code, text) => {
    const [first, ...others] = messages(items);
    expect(first).toMatch(new RegExp(`^${code}: `));
    expect(first).toContain(text);
    expect(others).toEqual([]);
  });

  it('says of a parameter without value that its declaration is to blame', () => {
    expect(messages('localparam P = a; assign y = P;')).toEqual([
      'constant-required: `a` is a signal, but a constant is needed here; use literals and parameters',
      'name-undeclared: `P` has no meaning, because its declaration is faulty; mend that first',
    ]);
  });

  it('may be local to a routine', () => {
    const lines = messages(`
      function f(input v); real r; begin r = v; f = v; end endfunction
      assign y = f(a);`);
    expect(lines).toEqual([
      'not-supported: `real` has no bits; use reg or integer',
      'not-supported: `r` is a real number, which has no bits; declare it as reg or integer',
    ]);
  });
});
