import { describe, expect, it } from 'vitest';
import { circuitOf, reading, signalValue } from './elaborate/reading.js';

// What a gate-level or synthesizable text may hold, clause by clause of IEEE 1364-2005; the clause
// numbers are from memory.

/** Value of output `y` for values of the inputs. */
const valueOfY = (text: string, inputs: Record<string, number> = {}) =>
  signalValue(circuitOf(text), 'y', inputs);

describe('a text may hold', () => {
  it.each<[clause: string, text: string, inputs: Record<string, number>, y: number]>([
    [
      '3.5 numbers with blanks and underscores',
      "module t (output [15:0] y); assign y = 16 'h a_b; endmodule",
      {},
      0xab,
    ],
    [
      '3.6 strings as numbers',
      'module t (output [15:0] y); assign y = "AB"; endmodule',
      {},
      0x4142,
    ],
    [
      '3.8 attributes anywhere',
      '(* top *) module t ((* p = 1 *) input a, output y); (* keep, x = "1" *) not (* z *) u (y, a); endmodule',
      { a: 0 },
      1,
    ],
    [
      '4.6 nets that resolve their drivers',
      "module t (input a, b, output [3:0] y); wand p; wor q; tri1 r; supply0 s; assign p = a, p = b, q = a, q = b; bufif1 (r, 1'b0, a & b); assign y = {p, q, r, s}; endmodule",
      { a: 1, b: 0 },
      6,
    ],
    [
      '4.10 signed parameters with a range',
      'module t (output signed [7:0] y); parameter signed [3:0] P = -3; assign y = P >>> 1; endmodule',
      {},
      0xfe,
    ],
    [
      '4.10 specparams beside items',
      'module t (input a, output y); specparam d = 1:2:3; specify specparam e = 2; (a => y) = (d, e); endspecify buf (y, a); endmodule',
      { a: 1 },
      1,
    ],
    [
      '5.1.14 replication by 0',
      'module t (input a, output [3:0] y); parameter N = 0; assign y = {{N{a}}, a}; endmodule',
      { a: 1 },
      1,
    ],
    [
      '5.2.1 moving part selects on both sides',
      'module t (input [1:0] i, input [1:0] d, output reg [7:0] y); always @* begin y = 0; y[2 * i +: 2] = d; y[7 - 2 * i -: 2] = d; end endmodule',
      { i: 1, d: 2 },
      0x28,
    ],
    [
      '5.3 delays of three values',
      "module t (input a, b, output y); wire #(3) w = a & b; and #(1.2:1.5:1.8, 3) (y, w, 1'b1); endmodule",
      { a: 1, b: 1 },
      1,
    ],
    [
      '6.1.4 strengths',
      'module t (input a, b, output y); wire (strong0, weak1) n = a; assign (weak0, strong1) n = b; assign y = n; endmodule',
      { a: 0, b: 0 },
      0,
    ],
    [
      '7.1.5 arrays of gates',
      'module t (input [3:0] a, output [3:0] y); not #1 n [3:0] (y, a); endmodule',
      { a: 5 },
      10,
    ],
    [
      '8 primitives with all symbols',
      'primitive m (y, a, b, s); output y; input a, b, s; table 0 ? 0 : 0; 1 ? 0 : 1; ? 0 1 : 0; ? 1 1 : 1; b b x : x; endtable endprimitive module t (input a, b, s, output y); m u (y, a, b, s); endmodule',
      { a: 0, b: 1, s: 1 },
      1,
    ],
    [
      '9.5.1 casex with x in the expression',
      "module t (input [1:0] s, output reg [1:0] y); always @* casex ({s, 1'bx}) 3'b01?: y = 1; 3'b1x1: y = 2; default: y = 0; endcase endmodule",
      { s: 2 },
      2,
    ],
    [
      '9.5 items in any order, several labels',
      "module t (input [2:0] a, output reg [1:0] y); always @* casez (a) 3'b1??: y = 3; default: y = 0; 3'b01?, 3'b001: y = 1; endcase endmodule",
      { a: 1 },
      1,
    ],
    [
      '9.6 repeat, and a loop left by disable',
      'module t (input [7:0] a, output reg [3:0] y); integer i; always @* begin y = 0; repeat (3) y = y + 1; begin : f for (i = 0; i < 8; i = i + 1) if (a[i]) begin y = y + i; disable f; end end end endmodule',
      { a: 0x50 },
      7,
    ],
    [
      '10.2 tasks with output and inout',
      'module t (input [3:0] a, output reg [4:0] y); task add; input [3:0] x; inout [3:0] v; output c; {c, v} = x + v; endtask always @* begin y = 9; add(a, y[3:0], y[4]); end endmodule',
      { a: 12 },
      21,
    ],
    [
      '10.4.5 constant functions',
      'module t #(parameter D = 100, parameter W = log2(D)) (input [W-1:0] a, output [7:0] y); function integer log2 (input integer v); for (log2 = 0; 2 ** log2 < v; log2 = log2 + 1); endfunction assign y = W; endmodule',
      {},
      7,
    ],
    [
      '10.4.4 recursive functions',
      'module t (output [9:0] y); function automatic integer f (input integer n); f = n <= 1 ? 1 : n * f(n - 1); endfunction assign y = f(5); endmodule',
      {},
      120,
    ],
    [
      '12.2 parameters that depend on others',
      'module s #(parameter A = 2, B = A * 2) (output [7:0] y); assign y = B; endmodule module t (output [7:0] y); s #(.A(5)) u (y); endmodule',
      {},
      10,
    ],
    [
      '12.2.1 defparam into generate blocks',
      'module s #(parameter V = 0) (output [3:0] o); assign o = V; endmodule module t (output [7:0] y); genvar i; generate for (i = 0; i < 2; i = i + 1) begin : g s u (y[4 * i +: 4]); end endgenerate defparam g[0].u.V = 3, g[1].u.V = 4; endmodule',
      {},
      0x43,
    ],
    [
      '12.3 ports of expressions and without name',
      'module s (.in(a[1:0]), , {p, q}); input [1:0] a; output p, q; assign {q, p} = a; endmodule module t (input [1:0] a, output [1:0] y); s u (a, , y); endmodule',
      { a: 2 },
      1,
    ],
    [
      '12.3 constants at inouts that are only read',
      "module c (input A, inout VDD, inout [1:0] K, output Y); assign Y = A & VDD & (K == 2); endmodule module t (input a, output y); c u (.A(a), .VDD(1'b1), .K({1'b1, 1'b0}), .Y(y)); endmodule",
      { a: 1 },
      1,
    ],
    [
      '12.4 nested generate blocks',
      'module t (input [7:0] a, output [7:0] y); genvar i, j; generate for (i = 0; i < 2; i = i + 1) begin : o for (j = 3; j >= 0; j = j - 1) begin : n localparam K = i * 4 + j; case (K % 3) 0: assign y[K] = ~a[K]; 1, 2: begin : b assign y[K] = a[K]; end endcase end end endgenerate endmodule',
      { a: 0 },
      0x49,
    ],
    [
      '12.4.3 blocks that name themselves',
      'module t (input a, output y); if (1) begin wire w = ~a; end assign y = genblk1.w; endmodule',
      { a: 0 },
      1,
    ],
    [
      '14.2 conditional and edge paths',
      'module t (input c, d, r, output reg y); reg n; always @* y = c & d; specify if (r) (posedge c => (y +: d)) = 1; ifnone (d => y) = 1; $setup(d, posedge c &&& r, 1, n); $width(posedge c, 1, 0, n); endspecify endmodule',
      { c: 1, d: 1 },
      1,
    ],
    [
      '17.11 $clog2',
      'module t (output [7:0] y); parameter D = 100; assign y = $clog2(D); endmodule',
      {},
      7,
    ],
    [
      '19.2 default_nettype none',
      '`default_nettype none\nmodule t (input a, output y); wire w; not (w, a); not (y, w); endmodule',
      { a: 1 },
      1,
    ],
    [
      '19.3 macros with commas in brackets',
      '`define M(p, q) p + q\nmodule t (input [3:0] a, output [3:0] y); assign y = `M({a[0], a[1]}, (a[3:2])); endmodule',
      { a: 9 },
      4,
    ],
    [
      '19.3 macros over several lines',
      '`define M(p, \\\n  q) (p \\\n & q)\nmodule t (input [1:0] a, output y); assign y = `M(a[0],\n a[1]); endmodule',
      { a: 3 },
      1,
    ],
    [
      '19.4 conditions in a list of ports',
      'module t (input a\n`ifndef X\n, input b\n`ifdef X\n, input c\n`else\n, input d\n`endif\n`endif\n, output y); assign y = a & b & d; endmodule',
      { a: 1, b: 1, d: 1 },
      1,
    ],
  ])('%s', (_, text, inputs, y) => {
    expect(valueOfY(text, inputs)).toBe(y);
  });

  it('what only shows something, under any condition', () => {
    const text = `module t (input c, input [1:0] a, output reg [1:0] y);
      always @(posedge c) begin y <= a;
        if (^a === 1'bx) begin $display("unknown"); if (y !== 2'bzz) $stop; end else ;
        case (a) 2'bxx: $display("x"); default: ; endcase
      end endmodule`;
    const { circuit, problems } = reading(text);
    expect(circuit!.registers.count).toBe(2);
    expect(new Set(problems.map((problem) => problem.split(' ')[0]))).toEqual(
      new Set(['task-ignored']),
    );
    const assigns = reading(text.replace('else ;', 'else y <= 0;'));
    expect(assigns.problems.some((problem) => problem.startsWith('not-supported'))).toBe(true);
  });

  it('what a function assigns that decides whether something is shown', () => {
    const shows = [
      'if (f(a)) $display("a");',
      'if (f(a)) ;',
      'if (a[0]) $display("a"); else if (f(a)) $stop; else if (f(2)) ;',
      'begin : shown if (f(a)) begin $display("a"); end end',
      'case (a) 0: $display("a"); f(a): ; endcase',
      'case (f(a)) 0: ; default: $display("a"); endcase',
      '$display("%b", f(a));',
      'if (a[1]) $display("%b", $signed({same(f(a)), same(a)}));',
      'if (a[1]) begin : b reg g; $display("%b", f(a)); end',
      'if (nested(a)) $display("a");',
    ];
    for (const statement of shows) {
      const text = `module t (input [1:0] a, output reg [1:0] y); reg [1:0] t;
        function f(input [1:0] v); begin t = v + 1; f = v[1]; end endfunction
        function same(input v); same = v; endfunction
        function nested(input [1:0] v); begin : b reg t; t = f(v); nested = t; end endfunction
        always @* begin t = 0; ${statement} y = t; end endmodule`;
      const y = signalValue(reading(text).circuit!, 'y', { a: 2 });
      expect([statement, y]).toEqual([statement, 3]);
    }
  });

  it('functions that only look at signals where something is shown', () => {
    const text = `module t (input [1:0] a, output y); reg [1:0] t; assign y = a[0];
      function unknown(input v); reg [1:0] own [0:1]; begin
        own[a[0]] = t; unknown = own[0] === 2'bxx; $write("%b", t); end endfunction
      always @* begin t = a; if (unknown(1)) $display("a"); $display("%b", unknown(0)); end
    endmodule`;
    expect(reading(text).problems).toEqual([
      'task-ignored $display("a");@4',
      'task-ignored $display("%b", unknown(0));@4',
    ]);
  });

  const shown = 'task-ignored $display("a");@3';
  it.each([
    ['if (^amp) $display("a");', ['name-undeclared amp@3', shown]],
    [
      'if (a[0]) ; else if (nosuch) $display("a"); else begin : b if (other) ; end',
      ['name-undeclared nosuch@3', shown, 'name-undeclared other@3'],
    ],
    [
      'case (nosuch) 1: ; a[other]: $display("a"); endcase',
      ['name-undeclared nosuch@3', 'name-undeclared other@3', shown],
    ],
    ['if (nosuch(a)) $display("a");', ['name-undeclared nosuch(a)@3', shown]],
    // A variable of the block, a real number, and what a test bench around may have.
    [
      'if (a[0]) begin : b reg k; real r; if (k && r > 0.5 && bench.loud) $display("a"); end',
      [shown],
    ],
  ])('names that decide what is shown: %s', (statement, expected) => {
    const { problems } = reading(`module t (input [1:0] a, output reg y);
      always @* begin y = a[0];
 ${statement}
      end endmodule`);
    expect(problems).toEqual(expected);
  });
});
