import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../../compiler/diagnostics/sourceMap.js';
import type { Allowance } from '../../../../compiler/read/verilog/budget.js';
import { elaborate } from '../../../../compiler/read/verilog/elaborate/elaborate.js';
import { parseVerilog } from '../../../../compiler/read/verilog/parse.js';
import { reading } from './reading.js';

// Far less than what any text may take, so that the tests are quick.
const small: Allowance = { work: 20_000, numbers: 1 << 20 };

/** Code and place of each problem of a text that may take only so much. */
function problemsWithin(allowance: Allowance, text: string): string[] {
  const sources = new SourceMap();
  const diagnostics = new Diagnostics();
  const syntax = parseVerilog([new Source('t.v', text)], {}, sources, diagnostics);
  elaborate(syntax, { top: 'top', allowance }, sources, diagnostics);
  return diagnostics.list.map(({ code, span }) => {
    const at = span?.source.place(span.start);
    return `${code} ${at?.line}:${at?.column}`;
  });
}

const top = (items: string, ports = 'output y, input a') =>
  `module top (${ports});\n${items}\nendmodule\n`;

const f = 'function automatic integer f(input integer n);';

describe('a text that would go on without end', () => {
  it.each([
    [
      'loops in loops',
      `reg r; assign y = r; integer i, j;
       always @* begin r = 0;
         for (i = 0; i < 60000; i = i + 1) for (j = 0; j < 60000; j = j + 1) r = r ^ a;
       end`,
    ],
    ['a repeat in a repeat', 'reg r; initial repeat (60000) repeat (60000) r = ~r;'],
    [
      'a loop in a loop at power-up',
      `reg r; integer i, j;
       initial for (i = 0; i < 60000; i = i + 1) for (j = 0; j < 60000; j = j + 1) r = ~r;`,
    ],
    [
      'a loop in a constant function',
      `${f} integer i, j; begin
         f = 0; for (i = 0; i < n; i = i + 1) for (j = 0; j < n; j = j + 1) f = f + 1;
       end endfunction
       localparam P = f(60000);`,
    ],
    [
      'a function called in a loop',
      `function g(input b); integer i; begin
         g = b; for (i = 0; i < 60000; i = i + 1) g = ~g ^ b;
       end endfunction
       reg r; integer k; always @* begin r = 0; for (k = 0; k < 60000; k = k + 1) r = r ^ g(a); end`,
    ],
    [
      'a function that calls itself twice',
      `${f} f = n < 2 ? n : f(n - 1) + f(n - 2); endfunction localparam P = f(60);`,
    ],
    [
      'a task that calls itself twice',
      `reg r; task automatic t(input integer n); begin
         r = ~r; if (n > 0) begin t(n - 1); t(n - 1); end
       end endtask
       always @* begin r = a; t(60); end`,
    ],
    [
      'a loop that a signal may leave at each turn',
      `reg r; integer i; always @* begin : b
         r = 0; for (i = 0; i < 60000; i = i + 1) begin if (a) disable b; r = ~r; end
       end`,
    ],
    [
      'counts in counts of replications',
      `assign y = ^${'{'.repeat(60)}1${"{1'b1}}".repeat(60)};`.replaceAll('}{', '} {'),
    ],
  ])('with %s is given up', (_, items) => {
    const problems = problemsWithin(small, top(items));
    expect(problems.map((problem) => problem.split(' ')[0])).toEqual(['design-too-large']);
  });
});

describe('a text that would fill all memory', () => {
  const doubling = (levels: number) =>
    Array.from({ length: levels }, (_, i) => {
      const next = i + 1 === levels ? 'leaf' : `m${i + 1}`;
      return `module m${i} (output y, input a); wire b; ${next} u(b, a); ${next} v(y, b); endmodule\n`;
    }).join('');
  const halving = `module p (output y, input a); parameter N = 0, K = 0; wire b;
    if (N > 0) begin
      p #(N - 1, 2 * K) u (b, a); p #(N - 1, 2 * K + 1) v (y, b);
    end else assign y = a;
  endmodule
`;
  const leaf = 'module leaf (output y, input a); not (y, a); endmodule\n';

  it('with 2^40 instances is refused at the module that is too large', () => {
    const { problems, diagnostics } = reading(doubling(40) + leaf);
    expect(problems).toEqual(['design-too-large m17@18']);
    expect(diagnostics.list[0]!.message).toContain('it has 8388609 nets');
  });

  it('may have as many instances as it spells out', () => {
    const { circuit } = reading(doubling(12) + leaf, 'm0');
    expect(circuit!.netCount).toBe(1 + 2 ** 12);
  });

  it.each([
    ['wide nets', Array.from({ length: 9 }, (_, i) => `wire [99999:0] w${i};`).join('\n'), '4:16'],
    ['an array of gates', 'wire [149999:0] w; not g [149999:0] (w, a);', '2:20'],
    [
      'arrays of instances',
      `leaf u [299:0] (w, a); leaf v [99999:0] (x, a); wire [299:0] w; wire [99999:0] x;`,
      '2:24',
    ],
    [
      'generate loops in generate loops',
      `genvar i, j;
       for (i = 0; i < 60000; i = i + 1) begin : g
         for (j = 0; j < 60000; j = j + 1) begin : h wire w; end
       end`,
      '4:10',
    ],
    ['instances that each have parameters of their own', 'p #(200, 1) u (y, a);', '7:7'],
  ])('with %s is given up', (_, items, place) => {
    const text = top(items) + leaf + halving;
    expect(problemsWithin(small, text)).toEqual([`design-too-large ${place}`]);
  });

  it('with arguments of routines is given up', () => {
    const items = `function g(input b); reg [65535:0] m [0:65535]; g = b; endfunction assign y = g(a);`;
    expect(reading(top(items)).problems.join()).toMatch(
      /^(range-invalid|design-too-large) [^,]*@2$/,
    );
  });
});

describe('a value that is too wide', () => {
  it.each([
    ['a replication', 'assign y = ^{2000000000{a}};', 'range-invalid {2000000000{a}}@2'],
    [
      'a concatenation',
      `assign y = ^{${Array.from({ length: 20 }, () => '{60000{a}}').join()}};`,
      /^range-invalid \{\{60000.*@2$/s,
    ],
    ['a string', `assign y = ^"${'z'.repeat(9000)}";`, /^range-invalid "zz.*@2$/],
    ['a range', 'wire [2000000000:0] w;', 'range-invalid [2000000000:0]@2'],
  ])('in %s is refused where it stands', (_, items, problem) => {
    const { problems } = reading(top(items));
    expect(problems.filter((each) => !each.startsWith('net-undriven'))).toEqual([
      typeof problem === 'string' ? problem : expect.stringMatching(problem),
    ]);
  });

  it('in a product is given up', () => {
    const items = 'wire [999:0] p, q; assign p = q * q;';
    expect(problemsWithin(small, top(items))).toEqual(['design-too-large 2:35']);
  });

  it('by a shift, a power or a logarithm of constants is worked out', () => {
    const items = `
      localparam A = 1 << 4000000000, B = 3 ** 2000000000, C = $clog2({65536{1'b1}});
      localparam [65535:0] D = 65536'd3 ** 65536'd200000;
      assign y = a ^ A[0] ^ B[0] ^ C[4] ^ D[0];`;
    expect(reading(top(items)).problems).toEqual([]);
  });
});

describe('a text that nests deeply', () => {
  const nested = 'design-too-large';

  it.each([
    ['comparisons', `assign y = a${' == a'.repeat(6_000)};`, nested],
    ['shifts', `assign y = a${' << 1'.repeat(6_000)};`, nested],
    ['calls with all that calls hold', deepCalls(150), nested],
  ])('with %s is refused', (_, items, code) => {
    expect(
      problemsWithin({ work: 1e7, numbers: 1e8 }, top(items)).map((p) => p.split(' ')[0]),
    ).toEqual([code]);
  });

  it.each([
    ['sums', `assign y = a${' + a'.repeat(6_000)};`],
    ['conditionals', `assign y = ${'a ? 1 : '.repeat(6_000)}0;`],
    ['else', `reg r; assign y = r; always @* ${'if (a) r = 1; else '.repeat(6_000)}r = a;`],
    ['parentheses', `assign y = ${'('.repeat(480)}a${')'.repeat(480)};`],
    ['blocks', `reg r; assign y = r; always @* ${'begin '.repeat(480)}r = a;${' end'.repeat(480)}`],
  ])('with a long chain of %s is read', (_, items) => {
    expect(reading(top(items)).problems).toEqual([]);
  });

  it('with instances that are not recursive says so', () => {
    const chain = Array.from(
      { length: 302 },
      (_, i) => `module m${i} (output y, input a); m${i + 1} u(y, a); endmodule\n`,
    );
    const { problems, diagnostics } = reading(
      `${chain.join('')}module m302 (output y, input a); assign y = a; endmodule`,
    );
    expect(problems[0]).toEqual('design-too-large m300@300');
    expect(diagnostics.list[0]!.message).toContain('nested 300 deep');
  });

  function deepCalls(depth: number): string {
    const value = `${'~('.repeat(20)}f(n - 1)${')'.repeat(20)}`;
    return `${f} if (n < 1) f = 0; else f = ${value}; endfunction assign y = f(${depth});`;
  }
});
