import { describe, expect, it } from 'vitest';
import { circuitOf, netsOf, scopesOf, signalValue } from './reading.js';

describe('generate', () => {
  it('repeats a loop with a scope for each turn', () => {
    const circuit = circuitOf(`
      module inv (input a, output q); not (q, a); endmodule
      module t (input [3:0] a, output [3:0] y);
        genvar i;
        generate
          for (i = 0; i < 4; i = i + 1) begin : gen
            wire n;
            inv u1 (a[i], n);
            assign y[3 - i] = n;
          end
        endgenerate
      endmodule`);
    expect(scopesOf(circuit).slice(0, 2)).toEqual(['gen[0]', 'gen[1]']);
    expect(scopesOf(circuit)).toContain('gen[2].u1');
    expect(netsOf(circuit, 'gen[2].u1.q')).toEqual(netsOf(circuit, 'gen[2].n'));
    expect(signalValue(circuit, 'y', { a: 0b0111 })).toBe(0b0001);
  });

  it('lets loops nest and count down', () => {
    const circuit = circuitOf(`module t (input [1:0] a, b, output [3:0] y);
      genvar i, j;
      for (i = 1; i >= 0; i = i - 1) begin : row
        for (j = 0; j < 2; j = j + 1) begin : column
          assign y[2 * i + j] = a[i] & b[j];
        end
      end
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 2, b: 3 })).toBe(0b1100);
    expect(scopesOf(circuit)).toContain('row[1].column[0]');
  });

  it('reads the blocks of other turns by hierarchical names', () => {
    const circuit = circuitOf(`module t (input a, output y);
      genvar i;
      generate for (i = 0; i < 3; i = i + 1) begin : g
        wire n;
        if (i == 0) assign n = ~a;
        else assign n = ~g[i - 1].n;
      end endgenerate
      assign y = g[2].n;
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 0 })).toBe(1);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
  });

  it('takes the branch whose condition holds', () => {
    const text = (width: number): string => `module t (input a, output y);
      parameter W = ${width};
      generate
        if (W == 1) begin : one not g (y, a); end
        else if (W == 2) begin : two buf g (y, a); end
        else begin : many assign y = 0; end
      endgenerate
    endmodule`;
    expect(signalValue(circuitOf(text(1)), 'y', { a: 1 })).toBe(0);
    expect(signalValue(circuitOf(text(2)), 'y', { a: 1 })).toBe(1);
    expect(scopesOf(circuitOf(text(2)))).toEqual(['two']);
    expect(scopesOf(circuitOf(text(5)))).toEqual(['many']);
  });

  it('takes the case item that fits, or the default', () => {
    const text = (kind: string): string => `module t (input a, b, output y);
      generate case (${kind})
        2'b01, 2'b11: begin : odd and (y, a, b); end
        2'bx0: begin : half nor (y, a, b); end
        default: begin : other or (y, a, b); end
      endcase endgenerate
    endmodule`;
    expect(scopesOf(circuitOf(text("2'd3")))).toEqual(['odd']);
    expect(scopesOf(circuitOf(text('3')))).toEqual(['odd']);
    expect(scopesOf(circuitOf(text("2'bx0")))).toEqual(['half']);
    expect(scopesOf(circuitOf(text("2'd2")))).toEqual(['other']);
  });

  // Clause 12.4.3 of IEEE 1364-2005 numbers the unnamed blocks of a scope.
  it('names unnamed blocks genblk and the number of their construct', () => {
    const circuit = circuitOf(`module t (input a, output [3:0] y);
      parameter P = 1;
      wire genblk2;
      genvar i;
      if (P) begin : named wire n; end
      if (P) begin wire n; assign n = a; assign y[0] = n; end
      if (!P) begin wire n; end
      else if (P) begin wire m; assign m = a; assign y[1] = m; end
      for (i = 2; i < 4; i = i + 1) begin wire k; assign k = a; assign y[i] = k; end
    endmodule`);
    expect(scopesOf(circuit)).toEqual(['named', 'genblk02', 'genblk3', 'genblk4[2]', 'genblk4[3]']);
    expect(netsOf(circuit, 'genblk4[3].k')).toHaveLength(1);
  });

  it('keeps the names of one block apart from those of another', () => {
    const circuit = circuitOf(`module t (input a, output y, z);
      wire n; assign n = a;
      generate
        if (1) begin : g1 wire n; assign n = ~a; assign y = n; end
        if (1) begin : g2 assign z = n; end
      endgenerate
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(1);
  });

  it('gives a block parameters, functions and registers of its own', () => {
    const circuit = circuitOf(`module t (input clk, input [1:0] d, output [1:0] q);
      genvar i;
      for (i = 0; i < 2; i = i + 1) begin : bits
        localparam START = flip(i);
        function integer flip(input integer n); flip = 1 - n; endfunction
        reg r = START;
        always @(posedge clk) r <= d[i];
        assign q[i] = r;
      end
    endmodule`);
    expect([...circuit.registers.initial]).toEqual([1, 0]);
    expect([...circuit.registers.output]).toEqual(
      ['bits[0].r', 'bits[1].r'].map((name) => netsOf(circuit, name)[0]),
    );
  });

  it('takes a genvar of the module in several loops', () => {
    const circuit = circuitOf(`module t (input [1:0] a, output [1:0] y, z);
      genvar i;
      for (i = 0; i < 2; i = i + 1) begin : f assign y[i] = a[i]; end
      for (i = 0; i < 2; i = i + 1) begin : g assign z[i] = a[1 - i]; end
    endmodule`);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(2);
  });
});
