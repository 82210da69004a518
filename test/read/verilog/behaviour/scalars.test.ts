import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../../compiler/read/readNetlist.js';

/** The gates of a module with some assignments, in their order. */
function gatesOf(assigns: readonly string[]) {
  const text = `module m (a, b, v, u, y);
    input a, b; input [3:0] v; input [0:2] u; output [${assigns.length - 1}:0] y;
    wire signed s; wire [5:5] w;
    assign s = a, w = b;
    ${assigns.join('\n    ')}
  endmodule`;
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source('m.v', text)], {}, diagnostics);
  expect(diagnostics.list).toEqual([]);
  const { kind, faninStart, fanin } = circuit!;
  return { kind, faninStart, fanin };
}

const { expression } = fc.letrec<{ expression: string }>((tie) => ({
  expression: fc.oneof(
    { depthSize: 'small', withCrossShrink: true },
    fc.constantFrom('a', 'b', 's', 'w', 'w[5]', 'v[0]', 'v[3]', 'u[0]', 'u[2]', "1'b0", "1'b1"),
    fc.tuple(fc.constantFrom('~', ''), tie('expression')).map(([sign, of]) => `${sign}(${of})`),
    fc
      .tuple(tie('expression'), fc.constantFrom('&', '|', '^', '~^'), tie('expression'))
      .map(([left, operator, right]) => `(${left} ${operator} ${right})`),
    fc
      .tuple(tie('expression'), tie('expression'), tie('expression'))
      .map(([condition, one, zero]) => `(${condition} ? ${one} : ${zero})`),
  ),
}));

describe('an assignment of single bits', () => {
  it('makes the gates that one of vectors does, in their order', () => {
    fc.assert(
      fc.property(fc.array(expression, { minLength: 1, maxLength: 5 }), (values) => {
        const short = values.map((value, bit) => `assign y[${bit}] = ${value};`);
        // Concatenations are vectors, even of one bit.
        const general = values.map((value, bit) => `assign {y[${bit}]} = {${value}};`);
        expect(gatesOf(short)).toEqual(gatesOf(general));
      }),
      { seed: 71, numRuns: 200 },
    );
  });

  it('may lean deep to either side', () => {
    const left = `${'('.repeat(200)}a${' & b)'.repeat(100)}${' ^ v[1])'.repeat(100)}`;
    const right = `${'a ? b : '.repeat(200)}v[2]`;
    expect(gatesOf([`assign y[0] = ${left};`, `assign y[1] = ${right};`])).toEqual(
      gatesOf([`assign {y[0]} = {${left}};`, `assign {y[1]} = {${right}};`]),
    );
  });
});
