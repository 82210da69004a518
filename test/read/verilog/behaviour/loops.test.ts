import { describe, expect, it } from 'vitest';
import { bench, constantText, problemsOf } from './bench.js';

describe('a for loop', () => {
  it('is refused where its index cannot reach the end, however often it comes round', () => {
    const problems = problemsOf(`
      input [7:0] d; reg [7:0] y; reg [2:0] i;
      always @* for (i = 0; i < 8; i = i + 1) y[i] = d[7 - i];`);
    expect(problems.map(({ code, at }) => [code, at])).toEqual([['loop-unbounded', 'i < 8']]);
    expect(problems[0]!.message).toContain('`i` comes back to 0');
  });

  it.each([
    ['a step of nothing', 'for (i = 2; i < 8; i = i) n = n + 1;', '2'],
    ['an index that counts down past 0', 'for (i = 7; i >= 0; i = i - 1) n = n + 1;', '7'],
  ])('is refused with %s', (_, loop, value) => {
    const problems = problemsOf(`
      reg [7:0] n; reg [3:0] i;
      always @* begin n = 0; ${loop} end`);
    expect(problems.map(({ code }) => code)).toEqual(['loop-unbounded']);
    expect(problems[0]!.message).toContain(`comes back to ${value} before`);
    expect(problems[0]!.message).toMatch(
      /wider, or as an integer, or let each turn bring it nearer/,
    );
  });

  it.each([
    [
      'a step that changes another variable',
      'for (i = 0; i < 8; j = j + 1) n = n + d[0];',
      'i < 8',
      '`i`; its step changes `j`',
    ],
    [
      'nothing that changes what ends it',
      'i = 0; while (i < 8 && !k) begin n = n + i; j = j + 1; end',
      'i < 8 && !k',
      'nothing in it changes `i`, `k`;',
    ],
    [
      'a body that steps in circles',
      'for (i = 0; i < 8; j = j + 1) begin n = ~n; if (d[0]) n = 0; i = (i + 3) % 4; end',
      'i < 8',
      '`i` comes back to ',
    ],
    [
      'two variables that go round',
      'i = 0; j = 1; k = 0; while (i + k < 8) begin if (j == 3) i = k; else k = j; j = (j + 1) % 4; end',
      'i + k < 8',
      'come back to values that they had, so that this loop never ends; let each turn bring it nearer',
    ],
    [
      'an end that a function of parameters gives',
      'for (i = 0; i < log2(P); i = i + 1) n[i] = d[i];',
      'i < log2(P)',
      '`i` comes back to ',
    ],
  ])('is refused soon with %s', (_, loop, at, message) => {
    const problems = problemsOf(`
      parameter P = 5000; input [7:0] d; reg [7:0] n; reg [2:0] i, k; integer j;
      function integer log2(input integer v); for (log2 = 0; v > 1; log2 = log2 + 1) v = v >> 1; endfunction
      always @* begin n = 0; j = 0; k = 0; ${loop} end`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([['loop-unbounded', at]]);
    expect(problems[0]!.message).toContain(message);
  });

  it('may go on for long by variables of its body', () => {
    const { diagnostics, simulate } = bench(`
      parameter P = 1000; reg [15:0] n; reg [1:0] i; integer j;
      function integer twice(input integer v); twice = v * 2; endfunction
      always @* begin n = 0; j = 0; for (i = 0; j < twice(P); i = i + 1) begin n = n + 1; j = n; end end`);
    expect(diagnostics).toEqual([]);
    expect(simulate().number('n')).toBe(2000);
  });

  it('may come back to a value of its index where something else ends it', () => {
    const loops = [
      'for (i = 0; n < 9; i = i + 1) n = n + 1;',
      'for (i = 0; i < 3; i = n[0] | m) begin n = n + 1; if (n == 9) m = 3; end',
      'for (i = 0; i < 3; i = i + 1) begin n = n + 1; if (i == 2 && n < 9) i = 3; end',
      'begin : all for (i = 0; 1; i = i + 1) begin n = n + 1; if (n == 9) disable all; end end',
      'for (i = 0; goesOn(0); i = i + 1) n = n + 1;',
    ];
    for (const loop of loops) {
      const { diagnostics, simulate } = bench(`
        reg [7:0] n; reg [1:0] i, m;
        function goesOn(input any); goesOn = n < 9; endfunction
        always @* begin n = 0; m = 0; ${loop} end`);
      expect(diagnostics).toEqual([]);
      expect([loop, simulate().number('n')]).toEqual([loop, 9]);
    }
  });

  it('works out anew in each turn what functions read beyond their arguments', () => {
    const loops = [
      "for (s = 1; s < 5; s = s + 1) y[f(g(4'd1))] = 1;",
      "s = 1; while (f(g(4'd1)) < 5) begin y[s] = 1; s = s + 1; end",
      // A block's own variable hides the signal in that block alone.
      "for (s = 1; s < 5; s = s + 1) y[h(4'd0)] = 1;",
      "for (s = 1; s < 5; s = s + 1) y[f(h(4'd0))] = 1;",
      "for (s = 1; s < 5; s = s + 1) y[k(4'd0)] = 1;",
    ];
    for (const loop of loops) {
      const { diagnostics, simulate } = bench(`
        reg [15:0] y; reg [3:0] s;
        function [3:0] f(input [3:0] v); f = v; endfunction
        function [3:0] g(input [3:0] v); g = v + s - 1; endfunction
        function [3:0] h(input [3:0] v);
          begin begin : inner reg [3:0] s; s = v; h = s; end h = h + s; end
        endfunction
        function [3:0] k(input [3:0] v);
          begin : one reg [3:0] t; t = v; begin : two reg [3:0] s; s = t; t = s; end k = t + s; end
        endfunction
        always @* begin y = 0; ${loop} end`);
      expect([loop, diagnostics, simulate().number('y')]).toEqual([loop, [], 0x1e]);
    }
  });

  it('ends in a constant function as anywhere else', () => {
    const items = `
      function integer log2(input integer n);
        for (log2 = 0; n > 1; log2 = log2 + 1) n = n >> 1;
      endfunction`;
    expect(constantText('log2(1000)', items)).toBe(`32'sb${(9).toString(2).padStart(32, '0')}`);
    const endless = `
      function [3:0] f(input any); reg [1:0] i;
        for (i = 0; i < 4; i = i + 1) f = i;
      endfunction`;
    expect(constantText('f(0)', endless)).toContain('comes back to 0');
  });
});
