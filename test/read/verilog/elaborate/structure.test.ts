import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import { circuitOf, gatesOf, netsOf, portsOf, reading, scopesOf, signalValue } from './reading.js';

// s27: F. Brglez, D. Bryan, K. Kozminski, "Combinational profiles of sequential benchmark
// circuits", ISCAS 1989; here as a hierarchy with a flip-flop module.
const s27 = `
module dff (CK, Q, D);
  input CK, D;
  output Q;
  reg Q;
  always @(posedge CK) Q <= D;
endmodule
module s27 (CK, G0, G1, G17, G2, G3);
  input CK, G0, G1, G2, G3;
  output G17;
  wire G5, G10, G6, G11, G7, G13, G14, G8, G15, G12, G16, G9;
  dff DFF_0 (CK, G5, G10);
  dff DFF_1 (CK, G6, G11);
  dff DFF_2 (CK, G7, G13);
  not NOT_0 (G14, G0), NOT_1 (G17, G11);
  and AND2_0 (G8, G14, G6);
  or OR2_0 (G15, G12, G8), OR2_1 (G16, G3, G8);
  nand NAND2_0 (G9, G16, G15);
  nor NOR2_0 (G10, G14, G11), NOR2_1 (G11, G5, G9), NOR2_2 (G12, G1, G7), NOR2_3 (G13, G2, G12);
endmodule`;

describe('elaborate', () => {
  it('takes modules and primitives that several files have in the same words', () => {
    const cells = `primitive u_inv (y, a); output y; input a; table 0 : 1; 1 : 0; endtable endprimitive
      module c (input a, output y); u_inv (y, a); endmodule\n`;
    const top = 'module t (input a, output y); c u (a, y); endmodule\n';
    expect(reading(cells + top + cells + top).problems).toEqual([]);
    const other = `\`default_nettype none\n${cells}`;
    expect(reading(cells + top + other).problems).toEqual(['module-redefined c@6']);
    const macro = '`define V 0\nmodule c (output y); assign y = `V; endmodule\n';
    expect(reading(macro + macro).problems).toEqual(['module-redefined c@4']);
  });

  it('flattens s27', () => {
    const circuit = circuitOf(s27);
    expect(circuit.name).toBe('s27');
    expect(portsOf(circuit.inputs)).toEqual(['CK', 'G0', 'G1', 'G2', 'G3']);
    expect(portsOf(circuit.outputs)).toEqual(['G17']);
    expect(circuit.registers.count).toBe(3);
    expect(gatesOf(circuit).join(' ')).toBe('and nand nor nor nor nor not not or or');
    expect(circuit.netCount).toBe(5 + 3 + 10);
    expect(scopesOf(circuit)).toEqual(['DFF_0', 'DFF_1', 'DFF_2']);
  });

  it('lets a port and what is connected to it be one net', () => {
    const circuit = circuitOf(s27);
    expect(netsOf(circuit, 'DFF_1.D')).toEqual(netsOf(circuit, 'G11'));
    expect(netsOf(circuit, 'DFF_2.Q')).toEqual(netsOf(circuit, 'G7'));
    expect([...circuit.registers.clock]).toEqual([0, 1, 2].map(() => netsOf(circuit, 'CK')[0]));
  });

  it('joins ports that a module passes through by a buffer', () => {
    const circuit = circuitOf(`
      module through (input a, output y); assign y = a; endmodule
      module t (input a, output y); through u (a, y); endmodule`);
    expect(gatesOf(circuit)).toEqual(['buf']);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(1);
  });

  it('builds an assigned expression as one gate', () => {
    const circuit = circuitOf('module t (input a, b, output y); assign y = ~(a & b); endmodule');
    expect(gatesOf(circuit).join(' ')).toBe('and not');
    expect(circuit.netCount).toBe(4);
  });

  it('assigns one value to two nets', () => {
    const circuit = circuitOf(
      'module t (input a, b, output y, z); assign {y, z} = {2{a & b}}; endmodule',
    );
    expect(gatesOf(circuit)).toEqual(['and', 'buf']);
    expect(signalValue(circuit, 'y', { a: 1, b: 1 })).toBe(1);
    expect(signalValue(circuit, 'z', { a: 1, b: 1 })).toBe(1);
  });

  it('assigns constants', () => {
    const circuit = circuitOf("module t (output [3:0] y); assign y = 4'b0110; endmodule");
    expect(circuit.netCount).toBe(4);
    expect(signalValue(circuit, 'y', {})).toBe(6);
  });

  it('builds every gate with any number of inputs or outputs', () => {
    const circuit = circuitOf(`module t (input a, b, c, output [9:0] y);
      and (y[0], a, b, c); nand (y[1], a, b, c); or (y[2], a, b, c); nor (y[3], a, b, c);
      xor (y[4], a, b, c); xnor (y[5], a, b, c); buf (y[6], y[7], a); not #1 n (y[8], y[9], a);
    endmodule`);
    for (let i = 0; i < 8; i++) {
      const [a, b, c] = [i & 1, (i >> 1) & 1, (i >> 2) & 1];
      const and = a & b & c;
      const or = a | b | c;
      const xor = a ^ b ^ c;
      const bits = [and, 1 - and, or, 1 - or, xor, 1 - xor, a, a, 1 - a, 1 - a];
      const expected = bits.reduce((sum, bit, place) => sum + (bit << place), 0);
      expect(signalValue(circuit, 'y', { a, b, c })).toBe(expected);
    }
  });

  it('spreads an array of gates over vectors', () => {
    const circuit = circuitOf(`module t (input [3:0] a, input b, output [3:0] y);
      and g [3:0] (y, a, b);
    endmodule`);
    expect(gatesOf(circuit)).toHaveLength(4);
    expect(signalValue(circuit, 'y', { a: 10, b: 1 })).toBe(10);
    expect(signalValue(circuit, 'y', { a: 10, b: 0 })).toBe(0);
  });

  it('spreads an array of instances, the rightmost one getting the rightmost bits', () => {
    const circuit = circuitOf(`
      module pair (input [1:0] a, input s, output y); assign y = s ? a[1] : a[0]; endmodule
      module t (input [5:0] a, input s, output [0:2] y); pair u [0:2] (a, s, y); endmodule`);
    expect(scopesOf(circuit).sort()).toEqual(['u[0]', 'u[1]', 'u[2]']);
    expect(netsOf(circuit, 'u[2].a')).toEqual(netsOf(circuit, 'a').slice(0, 2));
    expect(signalValue(circuit, 'y', { a: 0b10_00_01, s: 0 })).toBe(0b001);
    expect(signalValue(circuit, 'y', { a: 0b10_00_01, s: 1 })).toBe(0b100);
  });

  it('connects by name, by place, and not at all', () => {
    const circuit = circuitOf(`
      module m (input a, b, output y, z); and (y, a, b); or (z, a, b); endmodule
      module t (input a, b, output y, z);
        m u1 (.z(z), .b(b), .a(a), .y());
        m u2 (a, b, y);
      endmodule`);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(1);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
    expect(netsOf(circuit, 'u1.y')).not.toEqual(netsOf(circuit, 'y'));
  });

  it('takes expressions, parts and constants as connections', () => {
    const circuit = circuitOf(`
      module m (input [3:0] a, input b, output [1:0] y); assign y = b ? a[3:2] : a[1:0]; endmodule
      module t (input [7:0] d, input p, q, output [3:0] y);
        m u1 ({d[7], d[1:0], 1'b1}, p ^ q, y[3:2]);
        m u2 (4'd6, ~p, {y[0], y[1]});
      endmodule`);
    expect(signalValue(circuit, 'y', { d: 0x82, p: 1, q: 0 })).toBe(0b11_01);
    expect(signalValue(circuit, 'y', { d: 0x82, p: 0, q: 0 })).toBe(0b01_10);
  });

  it('reads header ports that are parts or renamed', () => {
    const circuit = circuitOf(`
      module m (.in({a, b[1]}), .low(b[0]), y);
        input a; input [1:0] b; output [2:0] y;
        assign y = {a, b};
      endmodule
      module t (input [1:0] i, input l, output [2:0] y); m u (.in(i), .low(l), .y(y)); endmodule`);
    expect(signalValue(circuit, 'y', { i: 2, l: 1 })).toBe(5);
    expect(netsOf(circuit, 'u.b')).toEqual([...netsOf(circuit, 'l'), netsOf(circuit, 'i')[0]]);
  });

  it('keeps declared ranges of ports and signals', () => {
    const circuit = circuitOf(
      'module t (input [0:3] a, input [7:4] b, input c, output [-1:2] y); assign y = a ^ b; endmodule',
    );
    expect(portsOf(circuit.inputs)).toEqual(['a[0:3]', 'b[7:4]', 'c']);
    expect(portsOf(circuit.outputs)).toEqual(['y[-1:2]']);
    const signal = [...circuit.hierarchy.modules[0]!.signals].find(({ name }) => name === 'b')!;
    expect(signal).toMatchObject({ msb: 7, lsb: 4, isVector: true, width: 4 });
  });

  it('declares implicit nets of connections and assignments', () => {
    const circuit = circuitOf(`module t (input a, b, output y);
      and g1 (n1, a, b);
      assign n2 = ~n1;
      buf g2 (y, n2);
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 1, b: 1 })).toBe(0);
    expect(netsOf(circuit, 'n1')).toHaveLength(1);
  });

  it('joins nets by tran and by inout ports that pass through', () => {
    const circuit = circuitOf(`
      module wire_through (inout p, q); tran (p, q); endmodule
      module t (input a, output y);
        wire n;
        buf (n, a);
        wire_through u (n, m);
        not (y, m);
      endmodule`);
    expect(netsOf(circuit, 'm')).toEqual(netsOf(circuit, 'n'));
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0);
    expect(gatesOf(circuit)).toEqual(['buf', 'not']);
  });

  it('takes an inout of the top that nothing drives as an input', () => {
    const circuit = circuitOf('module t (inout p, output y); not (y, p); endmodule');
    expect(portsOf(circuit.inputs)).toEqual(['p']);
  });

  it('resolves wand and wor by gates', () => {
    const circuit = circuitOf(`
      module m (input a, output y); buf (y, a); endmodule
      module t (input a, b, c, output y, z);
        wand p; wor [1:0] q;
        assign p = a; assign p = b; m u (c, p);
        assign q[1] = a; not (q[1], b); assign q[0] = c;
        assign y = p; assign z = q[1];
      endmodule`);
    expect(signalValue(circuit, 'y', { a: 1, b: 1, c: 1 })).toBe(1);
    expect(signalValue(circuit, 'y', { a: 1, b: 1, c: 0 })).toBe(0);
    expect(signalValue(circuit, 'z', { a: 0, b: 1 })).toBe(0);
    expect(signalValue(circuit, 'z', { a: 0, b: 0 })).toBe(1);
    expect(signalValue(circuit, 'q', { a: 0, b: 1, c: 1 })).toBe(1);
  });

  it('gives nets of supplies and pulls their constant', () => {
    const circuit = circuitOf(`module t (input a, output [5:0] y);
      supply0 gnd; supply1 vdd; tri0 t0; tri1 t1, t2;
      pullup (u1); pulldown (u0);
      assign t2 = a;
      assign y = {u0, u1, t2, t1, t0 | gnd, vdd};
    endmodule`);
    expect(signalValue(circuit, 'y', { a: 0 })).toBe(0b010101);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(0b011101);
  });

  it('gives a variable that nothing assigns its value at power-up', () => {
    const circuit = circuitOf(`module t (output [2:0] y);
      reg [1:0] r = 2; reg s; initial s = 1;
      assign y = {s, r};
    endmodule`);
    expect(signalValue(circuit, 'y', {})).toBe(6);
  });

  it('gives registers the value of their declaration at power-up', () => {
    const circuit = circuitOf(`module t (input clk, input [1:0] d, output reg [1:0] q = 1);
      always @(posedge clk) q <= d;
    endmodule`);
    expect([...circuit.registers.initial]).toEqual([1, 0]);
  });

  it('gives unconnected inputs what unconnected_drive says', () => {
    const circuit = circuitOf(`
      module m (input a, b, output y); and (y, a, b); endmodule
      \`unconnected_drive pull1
      module t (input a, output y); m u (.a(a), .b(), .y(y)); endmodule`);
    expect(signalValue(circuit, 'y', { a: 1 })).toBe(1);
  });

  it('reaches nets inside instances by hierarchical names', () => {
    const circuit = circuitOf(`
      module leaf (input a, output y); wire inner; not (inner, a); not (y, inner); endmodule
      module mid (input a, output y); leaf u2 (a, y); endmodule
      module t (input a, output y, z, w);
        mid u1 (a, y);
        assign z = u1.u2.inner;
        assign w = t.u1.y;
      endmodule`);
    expect(signalValue(circuit, 'z', { a: 1 })).toBe(0);
    expect(signalValue(circuit, 'w', { a: 1 })).toBe(1);
  });

  it('keeps the place of a gate, and that of the instance for a library cell', () => {
    const text = `\`celldefine
      module CELL (input a, output y); not (y, a); endmodule
      \`endcelldefine
      module t (input a, output y, z);
        CELL u1 (a, y);
        not g1 (z, a);
      endmodule`;
    const circuit = circuitOf(text);
    expect(circuit.originOffset[netsOf(circuit, 'y')[0]!]).toBe(text.indexOf('CELL u1'));
    expect(circuit.originOffset[netsOf(circuit, 'z')[0]!]).toBe(text.indexOf('not g1'));
  });

  it('makes no net for the constants that only folding has used', () => {
    const circuit = circuitOf(s27);
    expect([...circuit.kind].filter((kind) => kind <= GateKind.Unknown)).toEqual([]);
  });

  it('flattens two hundred levels of nested modules', () => {
    const levels = 200;
    const modules = Array.from(
      { length: levels },
      (_, i) => `module m${i} (input a, output y); m${i + 1} u (a, y); endmodule`,
    );
    const text = `${modules.join('\n')} module m${levels} (input a, output y); not (y, a); endmodule`;
    const circuit = circuitOf(text);
    expect(circuit.netCount).toBe(2);
    expect(scopesOf(circuit)).toHaveLength(levels);
  });

  it('chooses the module that no other instantiates', () => {
    expect(circuitOf('module a; b u (); endmodule module b; endmodule').name).toBe('a');
    expect(circuitOf('module a; endmodule module b; endmodule', 'b').name).toBe('b');
  });

  it('passes over unused library cells when it chooses the top', () => {
    const cell = '`celldefine\nmodule CELL (input a); endmodule\n`endcelldefine\n';
    expect(circuitOf(`${cell}module t; endmodule`).name).toBe('t');
    const plain = 'module CELL1 (input a); endmodule module CELL2 (input a); endmodule';
    expect(circuitOf(`${plain} module t (input a); CELL1 u (a); endmodule`).name).toBe('t');
    expect(reading(`${cell}`).circuit!.name).toBe('CELL');
  });
});

const published = fileURLToPath(
  new URL('../../../../../shared/circuits/verilog/', import.meta.url),
);
const hasPublished = existsSync(published);
if (!hasPublished) console.log(`published circuits are not at ${published}; not checked`);

// Counts published with the circuits: Brglez, Bryan, Kozminski, ISCAS 1989.
describe.runIf(hasPublished)('published circuits', () => {
  it.each([
    ['s27', 4, 1, 3, 10],
    ['s641', 35, 24, 19, 379],
    ['s1488', 8, 19, 6, 653],
    ['s5378', 35, 49, 179, 2779],
  ])('%s has its published counts', (name, inputs, outputs, registers, gates) => {
    const circuit = circuitOf(readFileSync(`${published}${name}.v`, 'latin1'), name);
    expect(circuit.inputs.length - 1).toBe(inputs);
    expect(circuit.outputs.length).toBe(outputs);
    expect(circuit.registers.count).toBe(registers);
    expect(gatesOf(circuit)).toHaveLength(gates);
  });
});
