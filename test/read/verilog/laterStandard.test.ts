import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';

/** The first message about a text that is `items` in a module, with what its place shows. */
function complaint(items: string, header = '') {
  const diagnostics = new Diagnostics();
  const text =
    header || `module t (input clk, input [7:0] a, output reg [7:0] y);\n${items}\nendmodule`;
  expect(readNetlist([new Source('t.v', text)], {}, diagnostics)).toBe(undefined);
  const { code, message, span } = diagnostics.list[0]!;
  return { code, message, at: text.slice(span!.start, span!.end) };
}

// The forms are those of IEEE 1800-2005, which IEEE 1364-2005 has not; from memory.
describe('a text of the later standard', () => {
  it.each([
    ['logic [7:0] w;', '[', 'write reg for what procedures assign, and wire for the rest'],
    ['always_ff @(posedge clk) y <= a;', '@', 'write always'],
    ['always_comb y = a;', '=', 'write always @*'],
    ['int n;', ';', 'write integer'],
    ['typedef enum {A, B} state;', '{', 'names by localparam'],
    ['always @* unique case (a) 0: y = 1; endcase', 'case', 'leave it out'],
    ["always @* y = '0;", "'", "write {W{1'b0}}"],
    ["always @* y = a ^ '1;", "'", "write {W{1'b1}}"],
    ["always @* y = 4'(a);", "'", 'select bits, or use $signed'],
    ["always @* y = '{0, 1};", "'", 'assign the elements one by one'],
    ['s u (.*);', '*', 'connect each port by .port(net)'],
    ['s u (.a, .y(y));', ',', 'connect it by .port(net)'],
    ['integer i; always @* for (i = 0; i < 8; i++) y[i] = a[i];', '+', 'write i = i + 1'],
    ['always @* begin y = 0; y -= a; end', '-', 'write a = a - b'],
    ['always @* begin y = 1; y <<= a; end', '', 'write a = a << b'],
    ['reg [7:0] m [4];', ']', '[0:3] for [4]'],
    ['wire [1:0][3:0] w;', '[', 'put it behind the name, or make one range'],
    ['always @* begin : b y = a; end : b', ':', 'leave it out'],
    ['function f (input b); return ~b; endfunction', '~', 'the name of the function'],
    ['wire w = a inside {1, 2};', 'inside', 'compare with each of the values'],
    ['assert property (@(posedge clk) a);', '@', 'between `ifdef and `endif'],
  ])('is told the way out of `%s`', (items, at, advice) => {
    const found = complaint(items);
    expect(found.code).toBe('syntax-error');
    expect(found.message).toContain('of SystemVerilog, but IEEE 1364-2005 Verilog is read here: ');
    expect(found.message).toContain(advice);
    if (at !== '') expect(found.at).toBe(at);
  });

  it.each([
    ['package p; parameter W = 3; endpackage', 'package', 'for `include'],
    ['interface bus; endinterface', 'interface', 'declare its signals as ports'],
    ['timeunit 1ns;', 'timeunit', 'write `timescale'],
    ['module t (input a); endmodule : t', ':', 'leave it out'],
    ['module t (input [1:0][3:0] a); endmodule', '[', 'make one range'],
    ['module t #(parameter int W = 3) (input a); endmodule', 'W', 'write integer'],
  ])('is told the way out of `%s`, too', (text, at, advice) => {
    const found = complaint('', text);
    expect([found.at, found.message.includes(advice), found.message]).toEqual([
      at,
      true,
      found.message,
    ]);
  });

  it('is read without the defaults of macros, after the message', () => {
    const diagnostics = new Diagnostics();
    const text =
      '`define M(p, q = 3) (p + q)\nmodule t (output [3:0] y); assign y = `M(1, 2); endmodule';
    readNetlist([new Source('t.v', text)], {}, diagnostics);
    expect(diagnostics.list).toHaveLength(1);
    expect(diagnostics.list[0]!.message).toContain('give the argument wherever it is used');
  });

  it('is none where something else is wrong', () => {
    const vector =
      'primitive p (o, a); output [1:0] o; input a; table 0 : 1; endtable endprimitive';
    for (const text of [
      vector,
      'module t (input a b); endmodule',
      'module t; s u (.a b); endmodule',
    ]) {
      expect([text, complaint('', text).message.includes('SystemVerilog')]).toEqual([text, false]);
    }
  });
});
