import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../../compiler/read/readNetlist.js';
import { netsOf, portsOf, scopesOf, signalValue } from './reading.js';

/** Reads a text with modules left out; see `reading` for the form of the problems. */
function boxed(text: string, ...blackBoxes: string[]) {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source('t.v', text)], { blackBoxes }, diagnostics);
  const problems = diagnostics.list.map(({ code, span }) => {
    if (span === undefined) return code;
    const { line } = span.source.place(span.start);
    return `${code} ${span.source.slice(span.start, span.end)}@${line}`;
  });
  return { circuit: circuit!, problems, message: diagnostics.list[0]?.message };
}

function ports(text: string, ...blackBoxes: string[]) {
  const { circuit, problems } = boxed(text, ...blackBoxes);
  expect(problems).toEqual([]);
  return [portsOf(circuit.inputs), portsOf(circuit.outputs)];
}

const memory = `module ram #(parameter W = 4) (input clk, input [W-1:0] d, output [W-1:0] q);
  reg [W-1:0] m [0:1][0:1]; initial forever #5 release q; missing u ();
endmodule\n`;

describe('black boxes', () => {
  const text = `${memory}module t (input clk, input [3:0] a, output [3:0] y);
    wire [3:0] n = ~a, k;
    ram r (clk, n, k);
    assign y = ~k;
  endmodule`;

  it('become ports named by the path of the instance', () => {
    expect(ports(text, 'ram')).toEqual([
      ['clk', 'a[3:0]', 'r.q[3:0]'],
      ['y[3:0]', 'r.clk', 'r.d[3:0]'],
    ]);
    const { circuit } = boxed(text, 'ram');
    expect(signalValue(circuit, 'y', { 'r.q': 0b0011 })).toBe(0b1100);
    expect(signalValue(circuit, 'r.d', { a: 0b0101 })).toBe(0b1010);
    expect(scopesOf(circuit)).toEqual(['r']);
  });

  it('have the widths that their parameters give', () => {
    const wide = `${memory}module t (input clk, input [7:0] a, output [7:0] y);
      genvar i; for (i = 0; i < 1; i = i + 1) begin : g ram #(8) r (.clk(clk), .d(a), .q(y)); end
    endmodule`;
    expect(ports(wide, 'ram')).toEqual([
      ['clk', 'a[7:0]', 'g[0].r.q[7:0]'],
      ['y[7:0]', 'g[0].r.clk', 'g[0].r.d[7:0]'],
    ]);
  });

  it('without a definition drive words of an array of nets', () => {
    const open = `module t (input a, output y); wire w [0:1];
      missing u (.d(a), .q(w[1])); assign y = ~w[1];
    endmodule`;
    const { circuit } = boxed(open, 'missing');
    expect(portsOf(circuit.inputs)).toEqual(['a', 'u.q']);
    expect(signalValue(circuit, 'y', { 'u.q': 0 })).toBe(1);
  });

  it('lie as deep as their instances, one after another', () => {
    const deep = `module box (input d, output q); endmodule
      module mid (input i, output o); box b (i, o); endmodule
      module t (input a, output y); wire n; mid m1 (a, n), m2 (n, y); endmodule`;
    expect(ports(deep, 'box')).toEqual([
      ['a', 'm1.b.q', 'm2.b.q'],
      ['y', 'm1.b.d', 'm2.b.d'],
    ]);
  });

  it('leave out ports that are not connected', () => {
    const open = `module box (input d, e, output q, z); endmodule
      module t (input a, output y); box b (.d(a), .q(y)); endmodule`;
    expect(ports(open, 'box')).toEqual([
      ['a', 'b.q'],
      ['y', 'b.d'],
    ]);
  });

  it('drive buses together with others', () => {
    const { circuit } = boxed(
      `module box (output q); endmodule
      module t (input a, e, output y); wand n; box b (n); buf (n, a); buf (y, n); endmodule`,
      'box',
    );
    expect(signalValue(circuit, 'y', { a: 1, 'b.q': 1 })).toBe(1);
    expect(signalValue(circuit, 'y', { a: 1, 'b.q': 0 })).toBe(0);
  });

  it('read by an inout what else is driven there, and drive it otherwise', () => {
    const pads = `module pad (inout p, input d); endmodule
      module t (input a, b, output y); wire n, k; buf (k, b); pad u1 (n, a), u2 (k, a); buf (y, n);
      endmodule`;
    expect(ports(pads, 'pad')).toEqual([
      ['a', 'b', 'u1.p'],
      ['y', 'u2.p', 'u1.d', 'u2.d'],
    ]);
  });

  it('may be primitives', () => {
    const primitive = `primitive mux2 (y, s, a, b); output y; input s, a, b;
      table 0 0 ? : 0; 0 1 ? : 1; 1 ? 0 : 0; 1 ? 1 : 1; endtable endprimitive
      module t (input s, a, b, output y); mux2 u (y, s, a, b); endmodule`;
    expect(ports(primitive, 'mux2')).toEqual([
      ['s', 'a', 'b', 'u.y'],
      ['y', 'u.s', 'u.a', 'u.b'],
    ]);
  });

  it('need a name for each instance', () => {
    const unnamed = `primitive inv (y, a); output y; input a; table 0 : 1; 1 : 0; endtable endprimitive
      module t (input a, output y);\n inv (y, a); endmodule`;
    expect(boxed(unnamed, 'inv').problems).toEqual(['syntax-error inv@3']);
  });

  it('must be instantiated', () => {
    const { circuit, problems, message } = boxed(text, 'ram', 'rom');
    expect(circuit).toBeUndefined();
    expect(problems).toEqual(['choice-unknown']);
    expect(message).toContain('no instance of a module rom is in the design');
    expect(boxed('module t (input a); endmodule', 't').problems).toEqual(['choice-unknown']);
  });

  it('may not have another driver on an output', () => {
    const twice = `module box (output q); endmodule
      module t (input a, output y); buf (y, a);\n box b (y); endmodule`;
    expect(boxed(twice, 'box').problems).toEqual(['net-multiply-driven box@3']);
  });

  it('may not have a port that is called like another', () => {
    const taken = `module box (input d); endmodule
      module t (input a, output \\b.d );\n buf (\\b.d , a); box b (a); endmodule`;
    expect(boxed(taken, 'box').problems).toEqual(['name-redeclared box@3']);
  });
});

describe('black boxes that no file defines', () => {
  const t = (instance: string): string =>
    `module t (input a, input [1:0] b, output y, output [1:0] z);\n${instance}\nendmodule`;

  it('have the pins that are connected, outputs where nothing else drives', () => {
    const text = t('BOX u (.A(a), .B(b & {a, a}), .C(b[1]), .Q(y), .Z(z), .N());');
    expect(ports(text, 'BOX')).toEqual([
      ['a', 'b[1:0]', 'u.Q', 'u.Z[1:0]'],
      ['y', 'z[1:0]', 'u.A', 'u.C', 'u.B[1:0]'],
    ]);
  });

  it('read what tri-state drivers drive, and variables', () => {
    const text = t(`reg r; always @* r = a; bufif1 (y, a, b[0]); assign z = b;
      BOX u (.A(y), .R(r));`);
    const { circuit, problems } = boxed(text, 'BOX');
    expect(problems).toEqual([]);
    expect(portsOf(circuit.outputs)).toEqual(['y', 'z[1:0]', 'u.A', 'u.R']);
    expect(netsOf(circuit, 'u.A')).toEqual(netsOf(circuit, 'y'));
  });

  it('must have named connections', () => {
    const { problems, message } = boxed(t('BOX u (a, y); assign z = b;'), 'BOX');
    expect(problems).toContain('not-supported BOX@2');
    expect(message).toContain('black box BOX has connections by position');
  });

  it('need a name for each instance', () => {
    const { problems, message } = boxed(t('BOX (.A(a)); assign y = a; assign z = b;'), 'BOX');
    expect(problems).toContain('not-supported BOX@2');
    expect(message).toContain('has an instance without a name');
  });

  it('may not be arrays', () => {
    const { problems } = boxed(t('BOX u [1:0] (.A(b), .Q(z)); assign y = a;'), 'BOX');
    expect(problems).toContain('not-supported BOX@2');
  });

  it('may not connect a pin twice', () => {
    const { problems } = boxed(t('BOX u (.A(a),\n .A(b[0]), .Q(y), .Z(z));'), 'BOX');
    expect(problems).toEqual(['name-redeclared b@3']);
  });

  it('are refused where the direction of a pin cannot be told', () => {
    const between = t('BOX u1 (.A(a), .Q(n), .Z(z));\nBOX u2 (.A(n), .Q(y));');
    expect(boxed(between, 'BOX').problems).toEqual(['not-supported BOX@3']);
    expect(boxed(between, 'BOX').message).toContain('u1.Q among them');
    const half = t('wire n; buf (n, a); BOX u (.P({y, n})); assign z = b;');
    expect(boxed(half, 'BOX').problems).toEqual(['not-supported BOX@2']);
    expect(boxed(half, 'BOX').message).toContain('some of its bits are driven and some are not');
  });
});
