import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../../../compiler/circuit/powerUp.js';
import { designOf } from '../../../../compiler/compile.js';
import { RandomBits } from '../../../../runtime/random.js';
import { courseOf, enginesOf } from '../../../support/engines.js';
import { type PortValues, playValues } from '../../../support/portValues.js';
import { firstDifference, randomRows } from '../../../support/responses.js';
import { circuitOf, netsOf, reading, signalValue } from './reading.js';

/** Values of `y`, pulled up, for e, d = 00, 01, 10, 11. */
function column(items: string): string {
  const circuit = circuitOf(`module t (input e, d, output y); tri1 y; ${items} endmodule`);
  return [0, 1, 2, 3]
    .map((levels) => signalValue(circuit, 'y', { e: levels >> 1, d: levels & 1 }))
    .join('');
}

describe('z assigned by procedures', () => {
  it.each([
    ['a branch', "always @* if (e) q = d; else q = 1'bz;"],
    ['a default', "always @(e or d) begin q = 'bz; if (e) q = d; end"],
    ['a conditional', "always @* q = e ? d : 1'bz;"],
    ['a case', "always @* case ({e, d}) 2'b10: q = 0; 2'b11: q = 1; default: q = 1'bz; endcase"],
    ['a non-blocking assignment', "always @* begin q <= 1'bz; if (e) q <= d; end"],
    ['a variable of a block', "always @* begin : b reg t; t = e ? d : 1'bz; q = t; end"],
    ['a loop', "integer i; always @* for (i = 0; i < 1; i = i + 1) q = e ? d : 1'bz;"],
    ['the output of a task', "task z(output o); o = e ? d : 1'bz; endtask always @* z(q);"],
    [
      'a function',
      "function z(input c, v); if (c) z = v; else z = 1'bz; endfunction always @* q = z(e, d);",
    ],
    [
      'a function of a function',
      "function z(input c, v); z = c ? v : 1'bz; endfunction function w(input c, v); w = z(c, v); endfunction always @* q = w(e, d);",
    ],
    ['a bit', "reg [1:0] t; always @* begin t = {e ? d : 1'bz, 1'b0}; q = t[1]; end"],
    ['a bit from the left', "reg [0:1] t; always @* begin t = {2{e ? d : 1'bz}}; q = t[d]; end"],
    ['a part', "reg [2:0] t; always @* begin t = {1'b1, e ? d : 1'bz, 1'b0}; q = t[2:1]; end"],
    ['a moving part', "reg [2:0] t; always @* begin t = {3{e ? d : 1'bz}}; q = t[e +: 2]; end"],
    ['a word', "reg t [0:1]; always @* begin t[0] = e ? d : 1'bz; t[1] = d; q = t[~e & e]; end"],
    [
      'the argument of a function',
      "function z(input v); z = v; endfunction always @* q = z(e ? d : 1'bz);",
    ],
    [
      'a variable as an argument',
      "reg t; function [1:0] z(input [1:0] v); z = v[1:0]; endfunction always @* begin t = e ? d : 1'bz; q = z(t); end",
    ],
    [
      'an argument of a task',
      "task z(input v, inout o); o = e ? v : o; endtask always @* begin q = 1'bz; z(d, q); end",
    ],
  ])('by %s drives under the condition', (_, text) => {
    expect(column(`reg q; ${text} assign y = q;`)).toBe('1101');
  });

  it.each([
    ['a net', 'always @* q = n[0];'],
    ['a net through a variable', 'reg t; always @(n) begin t = n; q = t; end'],
    [
      'bits in a loop',
      'integer i; reg [1:0] t; always @* for (i = 0; i < 2; i = i + 1) t[i] = n[1 - i]; assign q = t[0];',
    ],
  ])('is handed on by a process that copies %s', (_, text) => {
    const kind = text.includes('assign q') ? 'wire' : 'reg';
    const bus = "wire [1:0] n = e ? {2{d}} : 2'bz;";
    expect(column(`${bus} ${kind} q; ${text} assign y = q;`)).toBe('1101');
  });

  it('is no copy where an operator or a condition stands between', () => {
    const bus = "wire n = e ? d : 1'bz;";
    expect(column(`${bus} reg q; always @* q = n & 1'b1; assign y = q;`)).toBe('xx01');
    expect(column(`${bus} reg q; always @* if (d) q = n; else q = 0; assign y = q;`)).toBe('0x01');
  });

  it('comes out of a function in a continuous assignment, and of a port', () => {
    const z = "function z(input c, v); if (c) z = v; else z = 1'bz; endfunction";
    expect(column(`${z} assign y = z(e, d);`)).toBe('1101');
    const cell = "module pad (input e, d, output reg q); always @* q = e ? d : 1'bz; endmodule";
    const circuit = circuitOf(
      `module t (input e, d, output y); tri1 y; pad p (e, d, y); endmodule ${cell}`,
    );
    expect(signalValue(circuit, 'y', { e: 0, d: 0 })).toBe(1);
    expect(signalValue(circuit, 'y', { e: 1, d: 0 })).toBe(0);
  });

  it('is x in a bit of it that is not there', () => {
    expect(
      column(
        "reg [1:0] t; reg q; always @* begin t = {2{e ? d : 1'bz}}; q = t[{1'b1, d}]; end assign y = q;",
      ),
    ).toBe('xxxx');
  });

  it('reads as x where it is an operand', () => {
    expect(column("reg q, r; always @* begin q = e ? d : 1'bz; r = ~q; end assign y = r;")).toBe(
      'xx10',
    );
    expect(column("reg q, r; always @* q = e ? d : 1'bz; always @* r = q & d; assign y = r;")).toBe(
      '0x01',
    );
  });

  it('holds for each bit by itself', () => {
    const circuit = circuitOf(`module t (input e, input [3:0] d, output [3:0] y);
      tri1 [3:0] y; reg [3:0] q; assign y = q;
      always @* begin q = d; if (!e) q[2:1] = 2'bzz; end endmodule`);
    expect(signalValue(circuit, 'y', { e: 0, d: 0 })).toBe(0b0110);
    expect(signalValue(circuit, 'y', { e: 1, d: 5 })).toBe(5);
  });

  it('leaves a variable one driver: its process', () => {
    const text = `module t (input clk, e, d, output reg q);
      always @* q = e ? d : 1'bz;
      always @(posedge clk) q <= d;
    endmodule`;
    expect(reading(text).problems).toEqual(['net-multiply-driven q@3']);
    const both =
      "module t (input e, d, output reg q);\nalways @* q = e ? d : 1'bz;\nalways @* q = e ? 1'bz : d;\nendmodule";
    expect(reading(both).problems).toEqual(['net-multiply-driven q@3']);
    const copied =
      "module t (input e, d, output reg q); wire n = e ? d : 1'bz;\nalways @* q = n;\nalways @(n) q = n;\nendmodule";
    expect(reading(copied).problems).toEqual(['net-multiply-driven q@2']);
  });

  it('makes two registers of one, for the value and for whether it is driven', () => {
    const { registers } = circuitOf(`module t (input clk, e, d, output reg q);
      initial q = 1; always @(posedge clk) if (e) q <= d; else q <= 1'bz; endmodule`);
    expect([...registers.initial]).toEqual([1, 1]);
  });

  it('that nothing else assigns leaves a net without driver', () => {
    const { circuit } = reading(
      "module t (input e, output reg q); always @* if (e) q = 1'bz; endmodule",
    );
    expect(circuit?.registers.count).toBe(0);
    expect(netsOf(circuit!, 'q')).toHaveLength(1);
  });
});

/** Four ways to write what shows a value on a bus and leaves it alone otherwise. */
const machine = `
  module wires (input show, input [3:0] d, output reg [3:0] q);
    always @(show or d) if (show) q = d; else q = 4'hz;
  endmodule
  module edges (input clk, rst_n, show, input [3:0] d, output reg [3:0] q);
    always @(posedge clk or negedge rst_n)
      if (!rst_n) q <= 4'bz;
      else case ({show, d[3:2]})
        3'b100, 3'b101, 3'b110: q <= d;
        3'b111: q[0] <= ~d[0];
        3'b000: q[1:0] <= 2'bz;
        3'b001: ;
        default: q <= {4{1'bz}};
      endcase
  endmodule
  module levels (input pass, show, input [3:0] d, output reg [3:0] q);
    task put (input on, input [3:0] v, output [3:0] o); o = on ? v : 4'bz; endtask
    always @* if (pass) put(show, d, q);
  endmodule
  module calls (input show, input [3:0] d, output [3:0] q);
    function [3:0] shown (input on, input [3:0] v);
      casez (on) 1'b1: shown = v; default: shown = 'bz; endcase
    endfunction
    assign q = shown(show, d);
  endmodule
  module machine (input clk, rst_n, pass, input [3:0] d, input [1:0] from, output [3:0] bus, held, kept);
    tri1 [3:0] bus, held; tri0 [3:0] kept;
    wires w (from == 0, d, bus);
    calls c (from == 1, ~d, bus);
    edges e (clk, rst_n, from == 2, d, held);
    levels l (pass, from == 3, d, kept);
  endmodule`;

const CYCLES = 400;

function stimulus(): PortValues[] {
  const words = new Uint32Array(CYCLES);
  new RandomBits(5).fill(words, 0, CYCLES);
  return Array.from(words, (word, cycle) => ({
    d: word & 15,
    from: (word >> 4) & 3,
    pass: (word >> 6) & 1,
    rst_n: cycle === 0 || ((word >> 7) & 15) === 0 ? 0 : 1,
  }));
}

/** A value and the bits of it that are z. */
interface Shown {
  readonly value: number;
  readonly z: number;
}

const FLOATING: Shown = { value: 0, z: 15 };

function model(rows: readonly PortValues[]): { bus: number; held: number; kept: number }[] {
  let edges = FLOATING;
  let levels = FLOATING;
  const pulled = ({ value, z }: Shown, up: number): number => (value & ~z) | (z & up);
  return rows.map((row) => {
    const { d, from, pass, rst_n } = row as Record<string, number>;
    if (rst_n === 0) edges = FLOATING;
    if (pass === 1) levels = from === 3 ? { value: d!, z: 0 } : FLOATING;
    const bus = from === 0 ? d! : from === 1 ? ~d! & 15 : 15;
    const response = { bus, held: pulled(edges, 15), kept: pulled(levels, 0) };
    if (rst_n === 1) edges = edgesAfter(edges, from === 2, d!);
    return response;
  });
}

function edgesAfter(before: Shown, show: boolean, d: number): Shown {
  const high = d >> 2;
  if (show && high < 3) return { value: d, z: 0 };
  if (show) return { value: (before.value & 14) | (~d & 1), z: before.z & 14 };
  if (high === 0) return { value: before.value, z: before.z | 3 };
  return high === 1 ? before : FLOATING;
}

describe('variables that may be z', () => {
  const design = designOf(circuitOf(machine));

  it('drive a bus on every engine', async () => {
    const { reference, others } = await enginesOf(design);
    const rows = stimulus();
    const expected = model(rows);
    for (const [name, engine] of [['reference', reference] as const, ...others]) {
      const read = playValues(engine, rows);
      const seen = rows.map((_, cycle) => ({
        bus: Number(read('bus', cycle)),
        held: Number(read('held', cycle)),
        kept: Number(read('kept', cycle)),
      }));
      expect(seen, name).toEqual(expected);
    }
  });

  it('run the same on all engines with x', async () => {
    const unknown = designOf(design.circuit, { threeValued: true });
    const { reference, others } = await enginesOf(unknown);
    const rows = randomRows(unknown.layout, 3, CYCLES);
    const state = powerUpState(design.circuit, 'unknown');
    const expected = courseOf(reference, state, rows, CYCLES);
    for (const [name, engine] of others) {
      const { response } = courseOf(engine, state, rows, CYCLES);
      expect(firstDifference(unknown.layout, response, expected.response), name).toBe(undefined);
    }
  });
});
