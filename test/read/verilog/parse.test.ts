import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Source } from '../../../compiler/diagnostics/source.js';
import { hasPublishedCircuits, publishedCounts, publishedSource } from '../../support/published.js';
import { items, onlyProblem, read, readAll, readWell } from './reading.js';

describe('modules', () => {
  it('stand one after another, in several sources', () => {
    const { syntax, problems } = readAll([
      new Source('a.v', 'module a; endmodule module b; endmodule'),
      new Source('b.v', 'primitive p (output q, input a); table 0 : 1; endtable endprimitive'),
      new Source('c.v', '// nothing'),
      new Source('d.v', 'macromodule c; endmodule'),
    ]);
    expect(problems).toEqual([]);
    expect(syntax.modules.map((module) => syntax.names.text(module.name))).toEqual(['a', 'b', 'c']);
    expect(syntax.primitives).toHaveLength(1);
  });

  it('span their text and the place of their name', () => {
    const text = '(* top *) module \\m+1 (a); wire a; endmodule ;';
    const { syntax } = read(text);
    const module = syntax.modules[0]!;
    expect(text.slice(module.start, module.end)).toBe('module \\m+1 (a); wire a; endmodule');
    expect(text.slice(module.nameStart)).toMatch(/^\\m\+1 /);
    expect(syntax.names.text(module.name)).toBe('m+1');
  });

  it('have items in order', () => {
    expect(
      items(`
        wire w; assign (strong0, pull1) #(1, 2) w = a, {b, c} = d; ;
        always @(posedge c) q <= d;
        initial q = 0;
        (* x *) assign e = f;`),
    ).toEqual([
      'wire w;',
      'assign (strong0,pull1)w=a;',
      'assign (strong0,pull1){b,c}=d;',
      'always @(posedge c) q<=d;',
      'initial q=0;',
      'assign e=f;',
    ]);
  });

  it('have specify blocks, which are set aside', () => {
    expect(
      items(`
        specify
          specparam tR = 1:2:3, tF = (4);
          (a, b *> y) = (tR, tF); (posedge c => (q +: d)) = 5;
          if (en) (a => y) = 0x1; ifnone (a => y) = 1;
          $setup(d, edge [01, 0x, x1] c &&& en, 3, notifier);
          pulsestyle_ondetect y; showcancelled y; (a -=> y) = 1.5;
        endspecify
        wire w;`),
    ).toEqual(['wire w;']);
  });
});

describe('faults around modules', () => {
  it.each([
    [
      'module m; wire a;',
      "1:1 'module' the module 'm' has no 'endmodule' before the end of the text",
    ],
    [
      'module m; wire a;\nmodule n; endmodule',
      "1:1 'module' the module 'm' has no 'endmodule' before 'module'",
    ],
    ['wire a;', "1:1 'wire' expected 'module' or 'primitive', found 'wire'"],
    [
      'module m; endmodule endmodule',
      "1:21 'endmodule' expected 'module' or 'primitive', found 'endmodule'",
    ],
    ['a b; c d; module m; endmodule', "1:1 'a' expected 'module' or 'primitive', found 'a'"],
    [
      'module m; specify (a => b) = 1; endmodule',
      "1:11 'specify' the specify block has no 'endspecify'",
    ],
    ['module m; specparam', "1:20 '' expected ';', found the end of the text"],
    [
      'module m; 3; endmodule',
      "1:11 '3' expected a declaration, an instance or another item, or 'endmodule', found a number",
    ],
    [
      'module m; "x"; endmodule',
      "1:11 '\"x\"' expected a declaration, an instance or another item, or 'endmodule', found a string",
    ],
  ])('%s', (text, problem) => {
    const { problems } = read(text);
    expect(problems[0]).toBe(`syntax-error ${problem}`);
    expect(problems.length).toBeLessThanOrEqual(2);
  });

  it.each([
    ['config c; design lib.top; default liblist lib; endconfig', 'config'],
    ['library lib "*.v", "x/*.v";', 'library'],
    ['include "lib.map";', 'include'],
  ])('%s is refused', (text, word) => {
    const { syntax, problems } = read(`${text} module m; endmodule`);
    expect(problems).toEqual([
      `not-supported 1:1 '${word}' configurations and library maps are not read; ` +
        'name the files of the design and use --top',
    ]);
    expect(syntax.modules).toHaveLength(1);
  });

  it('every faulty item is reported, and the ones between are read', () => {
    const { syntax, problems } = read(
      'module m; wire a b; reg c; assign = d; assign e = f; inv g; always @( h = 1; nand (i, j); endmodule\n' +
        'module n; endmodule',
    );
    expect(problems.map((problem) => problem.split(' ')[1])).toEqual([
      '1:18',
      '1:35',
      '1:59',
      '1:73',
    ]);
    const kinds = syntax.modules[0]!.items.map((item) => item.kind);
    expect(kinds).toEqual(['declaration', 'assign', 'instances']);
    expect(syntax.modules).toHaveLength(2);
  });

  it('a place in a macro is that of its use', () => {
    expect(onlyProblem('`define BAD a b;\nmodule m;\n wire `BAD\nendmodule')).toMatch(
      /^syntax-error 3:7 '`BAD' /,
    );
  });

  it('after a hundred problems reading stops', () => {
    const { problems } = read(`module m; ${'assign 1;\n'.repeat(1000)}endmodule`);
    expect(problems).toHaveLength(101);
    expect(problems.at(-1)).toMatch(/too many problems; the rest is not read$/);
  });
});

describe('later words', () => {
  const hint = (word: string): string =>
    `'${word}' is a keyword of SystemVerilog, but IEEE 1364-2005 Verilog is read here`;

  it.each([
    ['module m; logic [3:0] a; endmodule', 'logic'],
    ['module m; always_ff @(posedge c) q <= d; endmodule', 'always_ff'],
    ['module m; always_comb begin end endmodule', 'always_comb'],
    ['module m (input logic a); endmodule', 'logic'],
    ['module m; typedef enum {A, B} t; endmodule', 'typedef'],
    ['package p; endpackage', 'package'],
    ['module m; initial for (int i = 0; i < 2; i = i + 1) a = i; endmodule', 'int'],
    ['module m; function automatic logic [3:0] f; endfunction endmodule', 'logic'],
    ['module m; initial unique case (a) 1: ; endcase endmodule', 'unique'],
    ['module m; initial return; endmodule', undefined],
  ])('%s', (text, word) => {
    const { problems } = read(text);
    if (word === undefined) expect(problems).toEqual([]);
    else expect(problems[0]).toContain(hint(word));
  });

  it('may be names', () => {
    expect(items('wire logic, bit; logic int (bit); assign logic = bit;')).toEqual([
      'wire logic,bit;',
      'logic int(bit);',
      'assign logic=bit;',
    ]);
  });
});

describe('reserved words', () => {
  it.each([
    ['wire config;', 'config'],
    ['assign a = cell & b;', 'cell'],
    ['inv u1 (.A(table));', 'table'],
    ['reg [3:0] instance;', 'instance'],
  ])('%s tells how to write the name', (item, word) => {
    expect(onlyProblem(`module m; ${item} endmodule`)).toContain(
      `found '${word}'; as a name, a reserved word is written with a backslash and a space: \\${word} `,
    );
  });
});

const samples = [
  `\`timescale 1ns/1ps
\`define W 8
\`ifdef X
\`else
module counter #(parameter N = \`W) (input clk, input rst, output reg [N-1:0] q = 0);
  always @(posedge clk or negedge rst)
    if (!rst) q <= {N{1'b0}};
    else begin : step
      integer i;
      for (i = 0; i < N; i = i + 1) q[i] <= q[i] ^ (&q[N-1:0]) ? 1'b1 : 4'bxz01;
      case (q) 1, 2: q <= #1 f(q); default: ; endcase
    end
  function [N-1:0] f; input [N-1:0] a; f = a + "s"; endfunction
endmodule
\`endif`,
  `module top (a, .b(c[3:0]), q); input a; output q; wire [3:0] c; supply1 vdd;
  \\inv/1 u1 (.A(a), .Y(c[0]), .Z()), u2 [1:0] (a, c[1] & a);
  nand #(1, 2) (q, c[2], vdd), g2 (c[3], a, a);
  generate genvar i; for (i = 0; i < 2; i = i + 1) begin : g buf b (c[i], a); end endgenerate
  if (1) assign q = a; else begin end
  specify (a => q) = (1, 2); endspecify
  defparam u1.P = 3; (* keep *) wand (strong0, weak1) w = a;
endmodule // end`,
  `primitive dff (q, c, d); output q; reg q; input c, d; initial q = 1'b0;
  table // c d : q : q+
    r 0 : ? : 0; (01) 1 : ? : 1; f ? : ? : -; ? * : ? : -;
  endtable endprimitive
/* a task */ module t; task k; input x; begin @(x) #5 y = x; wait (x); fork join -> e; end endtask
  initial begin repeat (3) k(1); $display("%b", y,); forever disable z; end endmodule`,
];

describe('damaged text', () => {
  const sample = fc.constantFrom(...samples);

  // What this checks is that reading ends and that no fault of our own is thrown.
  function survives(text: string | Uint8Array): void {
    const { syntax, problems } = read(text);
    for (const problem of problems) expect(problem).toMatch(/^[a-z-]+ \d+:\d+ '/);
    for (const { start, end } of syntax.modules) expect(end).toBeGreaterThanOrEqual(start);
  }

  it('the samples are whole', () => {
    for (const text of samples) readWell(text);
  });

  it('with bytes changed, removed or put in', () => {
    const change = fc.record({
      at: fc.nat(10_000),
      remove: fc.nat(4),
      insert: fc.uint8Array({ maxLength: 3 }),
    });
    fc.assert(
      fc.property(sample, fc.array(change, { minLength: 1, maxLength: 6 }), (text, changes) => {
        const bytes = [...new TextEncoder().encode(text)];
        for (const { at, remove, insert } of changes) {
          bytes.splice(at % bytes.length, remove, ...insert);
        }
        survives(Uint8Array.from(bytes));
      }),
      { seed: 1364, numRuns: 2000 },
    );
  });

  it('with words removed, doubled or moved', () => {
    const change = fc.record({ from: fc.nat(10_000), count: fc.nat(8), to: fc.nat(10_000) });
    fc.assert(
      fc.property(sample, fc.array(change, { minLength: 1, maxLength: 4 }), (text, changes) => {
        const words = text.match(/\s+|\w+|\W/g)!;
        for (const { from, count, to } of changes) {
          const moved = words.slice(from % words.length, (from % words.length) + count);
          if (to % 3 !== 0) words.splice(from % words.length, count);
          if (to % 3 !== 1) words.splice(to % (words.length + 1), 0, ...moved);
        }
        survives(words.join(''));
      }),
      { seed: 1364, numRuns: 2000 },
    );
  });

  it('of words in any order', () => {
    const word = fc.constantFrom(...new Set(samples.join(' ').match(/\w+|\S/g)!), '\n');
    fc.assert(
      fc.property(fc.array(word, { maxLength: 60 }), (words) => {
        survives(`module m; ${words.join(' ')}`);
      }),
      { seed: 1364, numRuns: 2000 },
    );
  });

  it.each([
    ['attributes', '(*'],
    ['macro uses', '`F('],
    ['comments', '/*'],
    ['strings', '"\\'],
    ['conditionals', '`ifdef X '],
    ['parentheses', '('],
    ['specify blocks', 'specify (* '],
    ['tables', 'primitive p (output q, input a); table (* '],
  ])('of a megabyte of begun %s', (_what, piece) => {
    const text = piece.repeat(Math.ceil(1_000_000 / piece.length));
    expect(read(`\`define F(x) x\nmodule m; ${text}`).problems.length).toBeLessThanOrEqual(101);
  });

  it('cut off at any place', () => {
    for (const text of samples) {
      for (let end = 0; end < text.length; end++) survives(text.slice(0, end));
    }
  });
});

// Counts from the published files and their paper: see `publishedCounts`.
const circuits = ['s27', 's344', 's386', 's641', 's1488', 's5378'];
if (!hasPublishedCircuits) {
  console.log('The published circuits are not there: their reading is not checked.');
}

describe.runIf(hasPublishedCircuits)('published circuits', () => {
  it.each(circuits)('%s has its registers and gates as instances', (name) => {
    const { syntax, problems } = readAll([publishedSource(`verilog/${name}.v`)]);
    expect(problems).toEqual([]);
    const top = syntax.modules.find((module) => syntax.names.text(module.name) === name)!;
    const [, , registers, gates] = publishedCounts[name]!;
    expect(top.instances.count).toBe(registers + gates);
    expect(top.instances.expressions).toEqual([]);
  });
});
