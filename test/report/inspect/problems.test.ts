import { describe, expect, it } from 'vitest';
import type { DiagnosticCode } from '../../../compiler/diagnostics/codes.js';
import type { Problem } from '../../../compiler/report/inspection.js';
import { inspectNetlist } from './reading.js';

/** A module `t`, one item a line from line 2 on, after the line of its ports. */
const netlist = (ports: string, ...items: string[]): string =>
  [`module t (${ports});`, ...items, 'endmodule'].join('\n');

const flop = `
module flop (input ck, d, output reg q, output qn);
  initial q = 0;
  always @(posedge ck) q <= d;
  assign qn = ~q;
endmodule`;

const problemsOf = (text: string, code: DiagnosticCode): Problem[] =>
  inspectNetlist(text).problems.filter((problem) => problem.code === code);

/** The one problem of a code, its place as `line:column`. */
function problemOf(text: string, code: DiagnosticCode) {
  const found = problemsOf(text, code);
  expect(found).toHaveLength(1);
  const { severity, message, file, line, column } = found[0]!;
  expect(file).toBe('top.v');
  return { severity, message, place: `${line}:${column}` };
}

describe('inspect finds', () => {
  it('loops, with the way round in the direction of values', () => {
    const text = netlist(
      'input a, b, output y',
      'wire p, q, r;',
      'nand (p, a, r);',
      'not (q, p);',
      'nand (r, q, b);',
      'buf (y, r);',
    );
    expect(problemOf(text, 'combinational-loop')).toEqual({
      severity: 'warning',
      place: '3:1',
      message:
        '3 nets feed back to themselves without a register: ' +
        'p (top.v:3), q (top.v:4), r (top.v:5), back to p',
    });
  });

  it('registers that reset themselves', () => {
    const text = netlist(
      'input clk, d, output reg p',
      'wire clear;',
      'buf (clear, p);',
      'always @(posedge clk or posedge clear) if (clear) p <= 0; else p <= d;',
    );
    expect(problemsOf(text, 'combinational-loop')).toEqual([]);
    const { severity, message } = problemOf(text, 'self-reset');
    expect(severity).toBe('warning');
    expect(message).toContain('the set or reset of 1 register follows from their own outputs');
    expect(message).toContain('p (top.v:4)');
  });

  it('cells that run from their table', () => {
    const text = `primitive both (q, c, d); output q; reg q; input c, d;
      table * 0:?:0; * 1:?:1; ? *:?:-; endtable endprimitive
      module t (input c, d, output q); both (q, c, d); endmodule`;
    expect(problemOf(text, 'table-run')).toMatchObject({ severity: 'note', place: '1:11' });
  });

  it('a gate that reads itself', () => {
    const text = netlist('input a, output y', 'or (y, a, y);');
    expect(problemOf(text, 'combinational-loop').message).toBe(
      'a net feeds back to itself without a register: y (top.v:2)',
    );
  });

  it('many loops, of which it describes ten', () => {
    const loops = Array.from({ length: 14 }, (_, i) => `or (y[${i}], a[${i}], y[${i}]);`);
    const text = netlist('input [13:0] a, output [13:0] y', ...loops);
    const found = problemsOf(text, 'combinational-loop');
    expect(found).toHaveLength(11);
    expect(found[10]).toEqual({
      severity: 'warning',
      code: 'combinational-loop',
      message: '4 more loops of this kind',
    });
  });

  it('a latch that reads itself while open, where a register is meant', () => {
    const text = netlist('input en, output reg t', 'always @(en or t)', '  if (en) t = ~t;');
    const { severity, message, place } = problemOf(text, 'latch-feedback');
    expect(severity).toBe('warning');
    expect(place).toBe('3:11');
    expect(message).toMatch(/^latch t passes its own value back to its data while it is open/);
    expect(problemsOf(text, 'combinational-loop')).toEqual([]);
  });

  it('no mistake in two latches of opposite phases, which make a register', () => {
    const text = netlist(
      'input clk, output reg s',
      'reg m;',
      'always @(clk or s) if (!clk) m = ~s;',
      'always @(clk or m) if (clk) s = m;',
    );
    expect(problemsOf(text, 'latch-feedback')).toEqual([]);
    expect(problemsOf(text, 'combinational-loop')).toHaveLength(1);
  });

  it('inputs that float, beside the nets without driver that the reader tells', () => {
    const text = netlist('input a, output y, z', 'wire f;', 'and (y, a, f);', 'or (z, a, f);');
    expect(problemOf(text, 'net-undriven').place).toBe('2:6');
    expect(problemOf(text, 'input-floating')).toEqual({
      severity: 'warning',
      place: '3:1',
      message:
        '2 inputs of gates, registers and latches read nets without driver, which are x, and 0 ' +
        'in two-valued runs: those of y (top.v:3), z (top.v:4)',
    });
  });

  it('no floating input in an x that is spelled out', () => {
    const text = netlist('input a, s, output y', "assign y = s ? a : 1'bx;");
    expect(inspectNetlist(text).problems).toEqual([]);
  });

  it('inputs of the top that nothing reads, whole or in part', () => {
    const text = netlist('input a, b, input [2:0] v, output y', 'and (y, a, v[1]);');
    expect(problemOf(text, 'port-unconnected')).toEqual({
      severity: 'warning',
      place: '1:20',
      message: '3 input bits of the top module are read by nothing: b, v[0], v[2]',
    });
  });

  it('registers whose clock pin no clock port moves', () => {
    const text = netlist(
      'input clk, d, output q, r',
      'supply0 still;',
      'flop f (.ck(clk), .d(d), .q(q));',
      'flop g (.ck(still), .d(d), .q(r));',
    );
    expect(problemOf(text + flop, 'register-unclocked')).toMatchObject({
      severity: 'warning',
      message: 'no clock port moves the clock pin of 1 register: r (top.v:4)',
      place: '4:1',
    });
  });

  it('clocks that it can only guess', () => {
    const text = netlist(
      'input p, s, d, output q',
      'wire c;',
      'and (c, p, s);',
      'flop f (.ck(c), .d(d), .q(q));',
    );
    expect(problemOf(text + flop, 'clock-guessed')).toEqual({
      severity: 'warning',
      place: '1:17',
      message:
        'which input is the clock cannot be told, so all that reach clock pins are taken: p, s; ' +
        'a name such as clk would settle it',
    });
  });

  it('gated clocks by net, with the registers on each', () => {
    const text = netlist(
      'input clk, en, d, output q, r',
      'wire g;',
      'and (g, clk, en);',
      'flop e (.ck(g), .d(d), .q(q));',
      'flop f (.ck(g), .d(q), .q(r));',
    );
    expect(problemOf(text + flop, 'clock-gated')).toEqual({
      severity: 'note',
      place: '3:1',
      message: '1 clock net is gated: g (top.v:3) for 2 registers',
    });
  });

  it('clocks that are read as data, a reset and an output', () => {
    const text = netlist(
      'input clk, d, output reg q, r, output c',
      'initial q = 0;',
      'always @(posedge clk) q <= x;',
      'wire x, pulse; xor (x, d, clk); and (pulse, clk, d);',
      'always @(posedge clk or posedge pulse) if (pulse) r <= 0; else r <= q;',
      'buf (c, clk);',
    );
    const { severity, message } = problemOf(text, 'clock-as-data');
    expect(severity).toBe('warning');
    expect(message).toBe(
      'clk is read as data in 3 places: q (top.v:3), the reset of r (top.v:5), output c',
    );
  });

  it('several clocks, and registers that capture across them', () => {
    const text = netlist(
      'input clk_a, clk_b, d, output q',
      'wire a, n;',
      'flop fa (.ck(clk_a), .d(d), .q(a));',
      'not (n, a);',
      'flop fb (.ck(clk_b), .d(n), .q(q));',
    );
    expect(problemOf(text + flop, 'clock-several')).toEqual({
      severity: 'note',
      place: '1:24',
      message: '2 clock ports, which tick together by themselves: clk_a, clk_b',
    });
    const { severity, message } = problemOf(text + flop, 'clock-crossing');
    expect(severity).toBe('warning');
    expect(message).toBe(
      '1 register captures values from registers on another clock: ' +
        'a (top.v:3) on clk_a to q (top.v:5) on clk_b',
    );
  });

  it('registers that nothing brings to a known value', () => {
    const text = netlist(
      'input clk, r, d, output reg p, q, output reg [4:0] v',
      'always @(posedge clk) q <= q ^ d;',
      'always @(posedge clk or posedge r) if (r) p <= 0; else p <= d;',
      'always @(posedge clk) v <= {v[3:0], q};',
    );
    expect(problemOf(text, 'register-no-start')).toMatchObject({
      severity: 'warning',
      place: '2:23',
      message: expect.stringMatching(
        /^6 of 7 registers have neither .*: q \(top\.v:2\), v\[0\] .*, v\[1\] .*, v\[2\] .* and 2 more$/,
      ),
    });
  });

  it('gates that lead nowhere, open outputs of cells among them', () => {
    const text = netlist(
      'input clk, d, output q',
      'wire s, t;',
      'flop f (.ck(clk), .d(d), .q(q));',
      'and (s, d, q);',
      'not (t, s);',
    );
    expect(problemOf(text + flop, 'logic-unused')).toMatchObject({
      severity: 'note',
      message:
        '3 gates lead to no output, register or latch; ' +
        'nothing reads t (top.v:5), f.qn (top.v:3)',
      place: '5:1',
    });
  });

  it('no gates that the reader itself has left over', () => {
    const text = netlist('input a, en, output y', 'bufif0 (y, a, en);', 'pullup (y);');
    expect(inspectNetlist(text).problems).toEqual([]);
  });

  it('a dead loop, which has no end', () => {
    const text = netlist('input a, output y', 'wire p;', 'buf (y, a);', 'or (p, a, p);');
    expect(problemOf(text, 'logic-unused').message).toBe(
      '1 gate leads to no output, register or latch: p (top.v:4)',
    );
  });

  it('state that no output depends on', () => {
    const text = netlist(
      'input clk, d, output q',
      'wire a, b;',
      'flop f (.ck(clk), .d(d), .q(q));',
      'flop g (.ck(clk), .d(q), .q(a));',
      'flop h (.ck(clk), .d(a), .q(b));',
    );
    expect(problemOf(text + flop, 'state-unused')).toMatchObject({
      severity: 'note',
      message:
        'no output depends on 2 registers and latches, not even through others: ' +
        'a (top.v:4), b (top.v:5)',
    });
  });

  it('names that differ only in case', () => {
    const text = netlist('input data, Data, output y', 'and (y, data, Data);');
    expect(problemOf(text, 'name-case')).toEqual({
      severity: 'note',
      place: '1:23',
      message: '1 pair of names differs only in the case of letters: data and Data',
    });
  });

  it('nothing in a netlist without faults', () => {
    const text = netlist('input clk, d, output q, n', 'flop f (.ck(clk), .d(d), .q(q), .qn(n));');
    expect(inspectNetlist(text + flop).problems).toEqual([]);
  });
});

describe('a problem inside an instance', () => {
  const top = netlist('input c, d, output q', 'part u (.c(c), .d(d), .q(q));');
  const placeOf = (part: string): string => problemOf(`${top}\n${part}`, 'register-no-start').place;

  it('is placed at the instance where it has a cell, with celldefine or without', () => {
    const flop = 'module part (input c, d, output reg q);\nalways @(posedge c) q <= d; endmodule';
    expect(placeOf(flop)).toBe('2:1');
    expect(placeOf(`\`celldefine\n${flop}\n\`endcelldefine`)).toBe('2:1');
  });

  it('is placed inside where the module is more than a cell', () => {
    const two = `module part (input c, d, output reg q);
      reg p;
      always @(posedge c) begin p <= d; q <= p; end endmodule`;
    expect(placeOf(two)).toMatch(/^6:/);
    const wide = `module part (input c, d, output reg [0:0] q, input [1:0] more);
      always @(posedge c) q <= d; endmodule`;
    expect(placeOf(wide)).toMatch(/^5:/);
    const flop = 'module flop (input c, d, output reg q);\nalways @(posedge c) q <= d; endmodule';
    const around = `module part (input c, d, output q);\nflop f (c, d, q); endmodule\n${flop}`;
    expect(placeOf(around)).toBe('5:1');
  });
});
