import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { circuitOf, evaluate, netsOf, reading, scopesOf, signalValue } from './reading.js';

const constant = `module constant (y);
  parameter W = 8, VALUE = 3;
  output [W-1:0] y;
  assign y = VALUE;
endmodule
`;

/** The widths of the signals at some paths. */
const widths = (circuit: Circuit, ...paths: string[]): number[] =>
  paths.map((path) => netsOf(circuit, path).length);

describe('parameters', () => {
  it('keep their default where nothing sets them', () => {
    const circuit = circuitOf(`${constant} module t (output [7:0] y); constant u (y); endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(3);
  });

  it('are set by name and by place', () => {
    const circuit = circuitOf(`${constant} module t (output [3:0] y, output [7:0] z);
      constant #(.VALUE(9), .W(4)) u1 (y);
      constant #(8, 200) u2 (z);
    endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(9);
    expect(signalValue(circuit, 'z', {})).toBe(200);
    expect(widths(circuit, 'u1.y', 'u2.y')).toEqual([4, 8]);
  });

  it('are set by defparam, also some levels down and into blocks', () => {
    const circuit = circuitOf(`${constant}
      module mid (output [7:0] y); constant u2 (y); endmodule
      module t (output [7:0] a, b, c);
        mid u1 (a);
        mid u3 (b);
        generate if (1) begin : g constant u4 (c); end endgenerate
        defparam u1.u2.VALUE = 5;
        defparam g.u4.VALUE = 6;
      endmodule`);
    expect(['a', 'b', 'c'].map((name) => signalValue(circuit, name, {}))).toEqual([5, 3, 6]);
  });

  it('in the header give the ranges of the ports beside them', () => {
    const circuit = circuitOf(`
      module m #(parameter W = 2, parameter [3:0] V = W + 1) (output [W-1:0] y);
        localparam LIMIT = V * 2;
        assign y = LIMIT;
      endmodule
      module t (output [1:0] y, output [5:0] z); m u1 (y); m #(6) u2 (z); endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(6 & 3);
    expect(signalValue(circuit, 'z', {})).toBe(14);
  });

  it.each([
    ['2.5', 3],
    ['-2.5', 253],
    ['R', 3],
    ['-R', 253],
    ['R * 2', 5],
    ['ONE / 2', 1],
    ['N / 2', 0],
    ['1 ? R + 0.1 : N', 3],
    ['R > 2.4 ? 7 : 8', 7],
    ['H', 1],
    ['H - 0.01', 0],
    ["(R > 2.4) ? {clk, 1'b1} & 2'b01 : 8", 1],
    ["(H - 0.2 ? 7 : 8) & {8{1'b1}}", 7],
  ])('round what real numbers give where %s is assigned to bits (4.8.2)', (text, value) => {
    const module = `module m #(parameter real R = 2.5, ONE = 1, parameter N = 1, H = 0.5)
        (input clk, output [7:0] y, output reg [7:0] q);
        assign #(R, H) y = ${text};
        always @(posedge clk) q <= #H ${text};
      endmodule`;
    const circuit = circuitOf(module);
    expect(signalValue(circuit, 'y', {})).toBe(value);
    const { data } = circuit.registers;
    expect(
      [...data].reduce((sum, net, i) => sum + evaluate(circuit, net, new Map()) * 2 ** i, 0),
    ).toBe(value);
  });

  it('of real numbers have no sums with signals', () => {
    const { problems } =
      reading(`module m #(parameter real R = 2.5) (input [3:0] a, output [3:0] y, z);
      assign y = a + R;
      assign z = a + 0.5; endmodule`);
    expect(problems).toEqual(['not-supported R@2', 'not-supported 0.5@3']);
  });

  it('may be real numbers, which stay so until a whole number is declared', () => {
    const circuit = circuitOf(`
      module m #(parameter real R = 1.0, parameter Q = 2) (output [7:0] y);
        localparam integer K = R * 10 + Q;
        assign y = K;
      endmodule
      module t (output [7:0] a, b, c, d, e);
        parameter F = 2.5;
        localparam [7:0] G = F * 3;
        m u0 (a);
        m #(F) u1 (b);
        m #(.R(3), .Q(F * 2)) u2 (c);
        m u3 (d);
        defparam u3.R = 0.25;
        assign e = G;
      endmodule`);
    const values = ['a', 'b', 'c', 'd', 'e'].map((name) => signalValue(circuit, name, {}));
    expect(values).toEqual([12, 27, 35, 5, 8]);
  });

  it('convert a value to the type that they declare', () => {
    const circuit = circuitOf(`module t (output [7:0] y, z, w);
      parameter [3:0] CUT = 8'hab;
      parameter signed [3:0] MINUS = 4'hf;
      parameter integer WIDE = 4'shf;
      assign y = CUT;
      assign z = MINUS;
      assign w = WIDE;
    endmodule`);
    expect(['y', 'z', 'w'].map((name) => signalValue(circuit, name, {}))).toEqual([
      0xb, 0xff, 0xff,
    ]);
  });

  // The value 4'b1100 as P[0:3]: P[0] and P[1] are 1; as Q[4:1]: Q[4] and Q[3] are 1; as R[-2:1]:
  // R[-2] and R[-1] are 1 (IEEE 1364-2005, clauses 4.10.1 and 5.2.1).
  it('number their bits by the range that they declare', () => {
    const circuit = circuitOf(`module t (input [2:0] i, output [9:0] y, z, output [3:0] w);
      localparam [0:3] P = 4'b1100;
      localparam [4:1] Q = 4'b1100;
      parameter signed [-2:1] R = 4'b1100;
      localparam PLAIN = 4'b1100;
      localparam integer WIDE = 4'b1100;
      localparam [9:0] ALL = {P[0], P[3], P[0:1], Q[4], Q[1], Q[4:3], R[-2], PLAIN[3]};
      assign y = ALL;
      assign z = {P[1+:2], P[2-:2], Q[2+:2], Q[3-:2], R[-1+:2]};
      assign w = {P[i], Q[i], R[$signed({1'b0, i}) - 2], WIDE[i]};
    endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(0b1011_1011_11);
    expect(signalValue(circuit, 'z', {})).toBe(0b10_10_10_10_10);
    expect(signalValue(circuit, 'w', { i: 1 })).toBe(0b1010);
    expect(signalValue(circuit, 'w', { i: 3 })).toBe(0b0101);
  });

  it('select moving parts by the range that they declare', () => {
    const circuit = circuitOf(`module t (input [2:0] i, output [1:0] a, b, c, d);
      localparam [0:3] P = 4'b1101;
      localparam [4:1] Q = 4'b1101;
      assign a = P[i+:2];
      assign b = P[i-:2];
      assign c = Q[i+:2];
      assign d = Q[i-:2];
    endmodule`);
    const at = (i: number) => ['a', 'b', 'c', 'd'].map((name) => signalValue(circuit, name, { i }));
    expect(at(1)).toEqual([0b10, 0b11, 0b01, 'x']);
    expect(at(2)).toEqual([0b01, 0b10, 0b10, 0b01]);
  });

  it('keep their range under an override and inside functions', () => {
    const circuit = circuitOf(`
      module m #(parameter [0:3] P = 0) (output a, output [1:0] b);
        assign a = P[0];
        function [1:0] pick(input [2:0] i);
          begin : inner
            localparam [1:4] L = 4'b1000;
            pick = {L[i], P[0]};
          end
        endfunction
        assign b = pick(1);
      endmodule
      module t (output a, output [1:0] b); m #(.P(8'hf8)) u (a, b); endmodule`);
    expect(signalValue(circuit, 'a', {})).toBe(1);
    expect(signalValue(circuit, 'b', {})).toBe(0b11);
  });

  it('refuse a part against their range and warn of a bit outside of it', () => {
    const { problems } = reading(`module t (output [1:0] a, output b);
      localparam [0:3] P = 4'b1000;
      localparam [4:1] Q = 4'b1000;
      assign a = P[1:0];
      assign b = Q[0];
    endmodule`);
    expect(problems).toEqual(['range-invalid P[1:0]@4', 'select-outside Q[0]@5']);
  });

  it('take the width and sign of an override where they declare none', () => {
    const circuit = circuitOf(`
      module m (output [7:0] y); parameter V = 0; assign y = V; endmodule
      module t (output [7:0] y, z); m #(-4'sd2) u1 (y); m #(4'd14) u2 (z); endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(254);
    expect(signalValue(circuit, 'z', {})).toBe(14);
  });

  it('may be computed by a constant function of the module', () => {
    const circuit = circuitOf(`module t (output [W-1:0] y);
      parameter DEPTH = 20;
      localparam W = bits(DEPTH);
      function integer bits(input integer n);
        begin
          bits = 0;
          while (n > 0) begin bits = bits + 1; n = n >> 1; end
        end
      endfunction
      assign y = 1;
    endmodule`);
    expect(widths(circuit, 'y')).toEqual([5]);
  });

  it('give instances with the same values one set of names', () => {
    const circuit = circuitOf(`${constant} module t (output [7:0] a, b, output [3:0] c);
      constant u1 (a);
      constant u2 (b);
      constant #(4) u3 (c);
    endmodule`);
    expect(circuit.hierarchy.modules).toHaveLength(3);
    expect(circuit.hierarchy.scopeModule[1]).toBe(circuit.hierarchy.scopeModule[2]);
  });

  it('let a module instantiate itself until they end it', () => {
    const circuit = circuitOf(`
      module tree #(parameter N = 4) (input [N-1:0] a, output y);
        generate
          if (N == 1) begin : one
            assign y = a[0];
          end else begin : half
            wire l, r;
            tree #(N / 2) left (a[N-1:N/2], l);
            tree #(N / 2) right (a[N/2-1:0], r);
            xor (y, l, r);
          end
        endgenerate
      endmodule
      module t (input [7:0] a, output y); tree #(8) u (a, y); endmodule`);
    expect(signalValue(circuit, 'y', { a: 0b1011_0010 })).toBe(0);
    expect(signalValue(circuit, 'y', { a: 0b1011_0000 })).toBe(1);
    expect(scopesOf(circuit)).toContain('u.half.left.half.right.half.left.one');
  });
});
