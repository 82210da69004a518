import { describe, expect, it } from 'vitest';
import { circuitOf, netsOf, reading, scopesOf, signalValue } from './reading.js';

// IEEE 1364-2005, clause 12.6.
describe('names that lead up', () => {
  it('reach a net of the module around by its name', () => {
    const circuit = circuitOf(`
      module leaf (output y); assign y = ~t.n; endmodule
      module t (input a, output y); wire n = a; leaf u (y); endmodule`);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
  });

  it('begin at the name of an instance around', () => {
    const circuit = circuitOf(`
      module leaf (output y); assign y = m1.p; endmodule
      module mid (input i, output y); wire p = ~i; leaf u (y); endmodule
      module t (input a, b, output [1:0] y); mid m1 (a, y[0]); mid m2 (b, y[1]); endmodule`);
    // In m2 the name leads to the instance beside it.
    expect(signalValue(circuit, 'y', { a: 1, b: 0 })).toBe(0);
    expect(signalValue(circuit, 'y', { a: 0, b: 1 })).toBe(3);
  });

  it('take the nearest level that has the name', () => {
    const circuit = circuitOf(`
      module leaf (output y); assign y = s.q; endmodule
      module side (output q); parameter V = 0; assign q = V; endmodule
      module mid (output y); side #(1) s (); leaf u (y); endmodule
      module t (output [1:0] y); side #(0) s (); mid m (y[0]); leaf u (y[1]); endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(0b01);
  });

  it('may be of instances that come later in the text', () => {
    const circuit = circuitOf(`
      module leaf (output y); assign y = late.q; endmodule
      module other (input d); wire q = ~d; endmodule
      module t (input a, output y); leaf u (y); other late (a); endmodule`);
    expect(signalValue(circuit, 'y', { a: 0 })).toBe(1);
  });

  it('reach blocks, bits, parameters and memories', () => {
    const circuit = circuitOf(`
      module leaf (output [3:0] y);
        assign y = {t.P[0], t.g[1].w, t.v[2], t.m[1][0]};
      endmodule
      module t (input clk, input [2:0] v, output [3:0] y);
        parameter P = 5;
        reg [1:0] m [0:1];
        always @(posedge clk) m[1] <= v;
        genvar i; for (i = 0; i < 2; i = i + 1) begin : g wire w = v[i]; end
        leaf u (y);
      endmodule`);
    const stored = new Map(netsOf(circuit, 'm[1]').map((net) => [net, 1]));
    expect(signalValue(circuit, 'y', { v: 0b010 }, stored)).toBe(0b1101);
    expect(signalValue(circuit, 'y', { v: 0b100 }, stored)).toBe(0b1011);
  });

  it('count as reading what they lead to', () => {
    const text = `module leaf (output y); assign y = t.n; endmodule
      module t (output y);\n wire n; leaf u (y); endmodule`;
    expect(reading(text).problems).toEqual(['net-undriven n@3']);
  });

  it('may drive what they lead to', () => {
    const circuit = circuitOf(`
      module leaf (input d); assign t.n = d; endmodule
      module t (input a, output y); wire n; leaf u (a); buf (y, n); endmodule`);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(1);
  });

  it('that drive a net with a driver are reported', () => {
    const text = `module leaf (input d); assign t.n = d; endmodule
      module t (input a, output y); wire n = ~a;\n leaf u (a); buf (y, n); endmodule`;
    expect(reading(text).problems).toEqual(['net-multiply-driven leaf@3']);
  });

  it('keep one scope for each instance', () => {
    const circuit = circuitOf(`
      module leaf (output y); assign y = t.a; endmodule
      module t (input a, output [1:0] y); leaf u1 (y[0]), u2 (y[1]); endmodule`);
    expect(scopesOf(circuit)).toEqual(['u1', 'u2']);
  });

  it('that lead nowhere are reported', () => {
    const text =
      'module leaf (output y);\n assign y = t.q; endmodule module t (output y); leaf u (y); endmodule';
    expect(reading(text).problems).toEqual(['name-undeclared t.q@2']);
  });
});

describe('names that lead down', () => {
  it('call a function that names nothing but parameters and its own variables', () => {
    const text = (body: string) => `
      module math (input [3:0] n); parameter P = 3;
        function [3:0] add (input [3:0] v); reg [3:0] t; begin t = v + P; add = ${body}; end endfunction
      endmodule
      module t (input [3:0] a, output [3:0] y); math #(5) m (a); assign y = m.add(a); endmodule`;
    expect(signalValue(circuitOf(text('t')), 'y', { a: 4 })).toBe(9);
    expect(reading(text('t + n')).problems).toEqual(['name-undeclared m.add(a)@5']);
  });

  it('drive a net of an instance that reads it', () => {
    const circuit = circuitOf(`
      module leaf (output y); wire n; not (y, n); endmodule
      module mid (output y); leaf u (y); endmodule
      module t (input a, output y, z);
        leaf u1 (y); assign u1.n = a;
        mid u2 (z); assign u2.u.n = ~a;
      endmodule`);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(1);
  });

  it('drive an input that nothing is connected to', () => {
    const circuit = circuitOf(`
      module leaf (input a, output y); not (y, a); endmodule
      module t (input d, output y); leaf u (.y(y)); assign u.a = d; endmodule`);
    expect(signalValue(circuit, 'y', { d: 1 })).toBe(0);
  });

  it('drive a net part of the time', () => {
    const circuit = circuitOf(`
      module leaf (output y); tri1 n; not (y, n); endmodule
      module t (input e, d, output y); leaf u (y); assign u.n = e ? d : 1'bz; endmodule`);
    expect([0, 1, 2, 3].map((i) => signalValue(circuit, 'y', { e: i >> 1, d: i & 1 }))).toEqual([
      0, 0, 1, 0,
    ]);
  });

  it('that are read twice over two levels have no second driver', () => {
    const circuit = circuitOf(`
      module leaf (output y); wire n; not (y, n); endmodule
      module mid (output y); leaf u (y); endmodule
      module t (input a, output y, z);
        mid m (y); assign m.u.n = a; assign z = m.u.n;
      endmodule`);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(1);
  });

  it('give variables of other modules their values at power-up', () => {
    const circuit = circuitOf(`
      module leaf (input clk, output [1:0] q); reg [1:0] r; reg [1:0] m [0:1];
        always @(posedge clk) begin r <= ~r; m[0] <= r; m[1] <= m[0]; end
        assign q = r ^ m[1];
      endmodule
      module mid (input clk, output [1:0] q); leaf u (clk, q); initial t.own = 1; endmodule
      module t (input clk, output [1:0] a, b, output reg own);
        mid m (clk, a); leaf n (clk, b);
        initial begin m.u.r = 2'd1; m.u.m[1] = 2'd2; n.m[0] = 2'b1x; end
        always @(posedge clk) own <= ~own;
      endmodule`);
    const { output, initial } = circuit.registers;
    const values = ['m.u.r', 'm.u.m[1]', 'm.u.m[0]', 'n.r', 'n.m[0]', 'own'].map((path) => {
      const bits = netsOf(circuit, path).map((net) => initial[output.indexOf(net)]);
      return bits.reverse().join('');
    });
    expect(values).toEqual(['01', '10', '22', '22', '12', '1']);
  });

  it('that only read leave the warning where nothing drives', () => {
    const text = `module leaf (output y);\n wire n; not (y, n); endmodule
      module t (output y, z); leaf u (y); assign z = u.n; endmodule`;
    expect(reading(text).problems).toEqual(['net-undriven n@2']);
  });
});

describe('defparam', () => {
  const leaf = 'module leaf #(parameter P = 0) (output y); assign y = P; endmodule\n';

  it('reaches elements of generate loops', () => {
    const circuit = circuitOf(`${leaf}module t (output [2:0] y);
      parameter LAST = 2;
      genvar i;
      for (i = 0; i < 3; i = i + 1) begin : g leaf u (y[i]); end
      defparam g[0].u.P = 1, g[LAST].u.P = 1;
    endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(0b101);
  });

  it('may begin with the name of its module', () => {
    const circuit = circuitOf(
      `${leaf}module t (output y); leaf u (y); defparam t.u.P = 1; endmodule`,
    );
    expect(signalValue(circuit, 'y', {})).toBe(1);
  });

  it('of an element that is not there is reported', () => {
    const text = `${leaf}module t (output y);\n if (1) begin : g leaf u (y); end
      defparam g[1].u.P = 1; endmodule`;
    const { problems, diagnostics } = reading(text);
    expect(problems).toEqual(['name-undeclared g[1].u.P = 1@4']);
    expect(diagnostics.list[0]!.message).toContain('defparam g[1].u.P leads to no parameter');
  });

  it('of one element of an array of instances is refused', () => {
    const text = `${leaf}module t (output [1:0] y); leaf u [1:0] (y);\n defparam u[1].P = 1; endmodule`;
    expect(reading(text).problems).toEqual(['not-supported u[1].P = 1@3']);
  });
});
