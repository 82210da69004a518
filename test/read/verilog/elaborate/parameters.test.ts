import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { circuitOf, netsOf, scopesOf, signalValue } from './reading.js';

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
