import { describe, expect, it } from 'vitest';
import { items, onlyProblem, read } from './reading.js';

describe('generate constructs', () => {
  it.each([
    ['generate wire a; assign a = b; endgenerate', ['wire a;', 'assign a=b;']],
    ['generate endgenerate', []],
    [
      'genvar i; for (i = 0; i < 4; i = i + 1) begin : g inv u (a[i], b); wire w; end',
      ['genvar i;', 'for(i=0;(i<4);i=(i+1)) begin:g inv u(=a[i],b); wire w; end'],
    ],
    [
      'for (i = 0; i < 4; i = i + 1) inv u (a[0]);',
      ['for(i=0;(i<4);i=(i+1)) begin inv u(a[0]); end'],
    ],
    ['if (W > 1) wire a; else wire b;', ['if((W>1)) begin wire a; end else begin wire b; end']],
    [
      'if (A) begin : x wire a; end else if (B) begin : y end else ;',
      ['if(A) begin:x wire a; end else begin if(B) begin:y end else begin end end'],
    ],
    ['if (A) ;', ['if(A) begin end']],
    [
      'case (W) 1: wire a; 2, 3: begin : x wire b; end default: ; endcase',
      ['case(W) 1: begin wire a; end 2,3: begin:x wire b; end default: begin end endcase'],
    ],
    [
      'begin : b wire a; and (x, y); end begin end',
      ['begin:b wire a; and (x,y); end', 'begin end'],
    ],
    [
      'generate if (A) begin always @* b = a; function f; input x; f = x; endfunction end endgenerate',
      ['if(A) begin always @(*) b=a; function f; input x; f=x; end'],
    ],
    [
      'generate for (i = 0; i < 2; i = i + 1) begin : g for (j = 0; j < i; j = j + 1) begin : h end end endgenerate',
      ['for(i=0;(i<2);i=(i+1)) begin:g for(j=0;(j<i);j=(j+1)) begin:h end end'],
    ],
  ])('%s', (text, shown) => {
    expect(items(text)).toEqual(shown);
  });

  it('instances in blocks are in the table of the module, in items of their own', () => {
    const { syntax } = read(
      'module m; inv a (x); if (A) begin inv b (x); inv c (x); end inv d (x); endmodule',
    );
    const [first, branch, last] = syntax.modules[0]!.items;
    expect(first).toEqual({ kind: 'instances', first: 0, count: 1 });
    if (branch?.kind !== 'generateIf') throw new Error(branch?.kind);
    expect(branch.whenTrue.items).toEqual([{ kind: 'instances', first: 1, count: 2 }]);
    expect(last).toEqual({ kind: 'instances', first: 3, count: 1 });
  });

  it.each([
    ['blocks', (n: number) => 'begin '.repeat(n) + 'end '.repeat(n)],
    ['ifs', (n: number) => `${'if (A) '.repeat(n)};`],
    ['else ifs', (n: number) => `${'if (A) ; else '.repeat(n)};`],
    ['cases', (n: number) => `${'case (A) 1: '.repeat(n / 2)};${' endcase'.repeat(n / 2)}`],
    ['regions', (n: number) => 'generate '.repeat(n) + 'endgenerate '.repeat(n)],
  ])('400 nested %s are read, 100000 are refused', (_what, nested) => {
    const text = (n: number): string => `module m; ${nested(n)}\nendmodule`;
    expect(read(text(400)).problems).toEqual([]);
    expect(onlyProblem(text(100_000))).toMatch(/nested more than 500 levels deep/);
  });
});

describe('faults', () => {
  it.each([
    ['for (i = 0; i < 2) ;', "1:28 ')' expected ';', found ')'"],
    ['for (1 = 0; i; i = 1) ;', "1:16 '1' expected the name of a genvar, found a number"],
    [
      'for (i = 0; i; i + 1) ;',
      "1:28 '+' expected '=' and a value, such as in i = i + 1, found '+'",
    ],
    ['if (A) begin wire a;', "2:1 'endmodule' expected 'end', found 'endmodule'"],
    ['generate wire a;', "2:1 'endmodule' expected 'endgenerate', found 'endmodule'"],
    [
      'generate begin wire a; endgenerate',
      "1:34 'endgenerate' expected 'end', found 'endgenerate'",
    ],
    [
      'end',
      "1:11 'end' expected a declaration, an instance or another item, or 'endmodule', found 'end'",
    ],
    ['case (A) 1: wire a;', "2:1 'endmodule' expected a case item or 'endcase', found 'endmodule'"],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`module m; ${text}\nendmodule`)).toBe(`syntax-error ${problem}`);
  });
});
