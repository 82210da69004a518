import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf } from '../../../compiler/compile.js';
import { inspectionPage } from '../../../compiler/report/inspect/page.js';
import { inspect } from '../../../compiler/report/inspection.js';
import { randomCircuit } from '../../support/randomCircuit.js';
import { inspectNetlist, inspectSmall } from './reading.js';

const SEED = 20261201;

const clocked = `
module gate (input ck, en, output g);
  reg open;
  always @(ck or en) if (!ck) open = en;
  and (g, ck, open);
endmodule
module flop (input ck, d, output reg q);
  always @(posedge ck) q <= d;
endmodule
module top (input clk, en, d, output [5:0] q);
  wire n, b, g;
  not (n, clk);
  not (b, n);
  gate one (clk, en, g);
  flop f0 (clk, d, q[0]), f1 (b, d, q[1]), f2 (n, d, q[2]), f3 (g, d, q[3]);
  flop f4 (q[0], ~q[4], q[4]), f5 (q[4], ~q[5], q[5]);
endmodule`;

const gates = `
module gate (input clk, rst, go, output open, output [1:0] now);
  localparam SHUT = 0, RISING = 1, UP = 2, OFF = 1'b0, ON = 1'b1;
  reg [1:0] state;
  always @(posedge clk) if (rst) state <= SHUT; else case (state)
    SHUT: if (go) state <= RISING;
    RISING: state <= UP;
    default: state <= SHUT;
  endcase
  wire lamp;
  assign lamp = go == ON ? OFF : ON;
  assign open = state == UP, now = state;
endmodule
module top (input clk, rst, a, b, output x, y, output [1:0] z);
  gate left (clk, rst, a, x,), right (clk, rst, b, y, z);
endmodule`;

describe('an inspection', () => {
  it('names the states of machines, on the page too', () => {
    const inspection = inspectNetlist(gates);
    const states = ['SHUT', 'RISING', 'UP'].map((name, value) => ({ value, name }));
    expect(inspection.machines).toEqual([
      { name: 'left.state', width: 2, states },
      { name: 'right.state', width: 2, states },
    ]);
    expect(inspectionPage(inspection)).toContain(`
  machines   left.state (3 named states: SHUT, RISING, UP)
             right.state (3 named states: SHUT, RISING, UP)
`);
    expect(inspectNetlist(clocked).machines).toEqual([]);
  });

  it('tells how registers and latches hang on a clock', () => {
    const { clocks, clockEnables } = inspectNetlist(clocked);
    expect(clockEnables).toEqual([]);
    expect(clocks).toEqual([
      {
        port: 'clk',
        registers: 6,
        direct: 1,
        buffered: 2,
        gated: 1,
        divided: 2,
        falling: 1,
        latches: 1,
        gatedNets: [{ net: 'g', registers: 1 }],
      },
    ]);
  });

  it('counts a register behind two clocks with both', () => {
    const { clocks } = inspectSmall({
      inputs: ['clk_a', 'clk_b', 's', 'd'],
      outputs: ['a', 'b', 'q'],
      gates: { c: 'mux s clk_a clk_b' },
      registers: {
        a: { clock: 'clk_a', data: 'd' },
        b: { clock: 'clk_b', data: 'd' },
        q: { clock: 'c', data: 'd', edge: 1 },
      },
    });
    const counts = clocks.map(({ port, registers, gated, falling }) => [
      ...[port, registers, gated, falling],
    ]);
    expect(counts).toEqual([
      ['clk_a', 2, 1, 1],
      ['clk_b', 2, 1, 1],
    ]);
  });

  it('counts cells by module, and registers by how they start', () => {
    const { cells, registers, state } = inspectNetlist(`
      module c1 (input ck, d, output reg q); initial q = 1; always @(posedge ck) q <= d; endmodule
      module c2 (input ck, r, d, output reg q);
        always @(posedge ck or posedge r) if (r) q <= 0; else q <= d;
      endmodule
      module pair (input ck, r, d, output q);
        wire m;
        c2 a (ck, r, d, m), b (ck, r, m, q);
      endmodule
      module top (input clk, r, d, output p, q);
        c1 a (clk, d, p);
        pair b (clk, r, p, q);
      endmodule`);
    expect(cells).toEqual({ c2: 2, c1: 1 });
    expect(Object.keys(cells)).toEqual(['c2', 'c1']);
    expect(registers).toBe(3);
    expect(state).toEqual({
      ...{ bits: 3, loopBits: 0 },
      ...{ withSet: 0, withReset: 2, initial: 1, unset: 0 },
    });
  });

  it('names the deepest path from its source to its end', () => {
    const { deepestPath, depth, levels, registerDepths } = inspectSmall({
      inputs: ['clk', 'a', 'b'],
      outputs: ['y'],
      registers: { q: { clock: 'clk', data: 'n2' }, r: { clock: 'clk', data: 'q' } },
      gates: { n1: 'nand a q', n2: 'not n1', n3: 'xor n2 b r', y: 'buf b' },
    });
    expect(depth).toBe(3);
    expect(levels).toEqual([0, 2, 1, 1]);
    expect(registerDepths).toEqual([1, 0, 1]);
    expect(deepestPath.slice(1)).toEqual([
      { net: 'n1', kind: 'nand' },
      { net: 'n2', kind: 'not' },
      { net: 'n3', kind: 'xor' },
    ]);
    expect(deepestPath[0]).toEqual({ net: 'a', kind: 'input' });
  });

  it('prefers a deepest path that ends at a register or output', () => {
    const { deepestPath } = inspectSmall({
      inputs: ['clk', 'a'],
      outputs: ['q'],
      gates: { unread: 'not a', d: 'buf a' },
      registers: { q: { clock: 'clk', data: 'd' } },
    });
    expect(deepestPath).toEqual([
      { net: 'a', kind: 'input' },
      { net: 'd', kind: 'buf' },
      { net: 'q', kind: 'register' },
    ]);
  });

  it('tells where a gate on the path stands that has no name', () => {
    const { deepestPath } = inspectNetlist(
      'module t (input a, b, c, output y);\nassign y = a & (b | c);\nendmodule',
    );
    expect(deepestPath).toEqual([
      { net: 'b', kind: 'input' },
      { net: 'or at top.v:2', kind: 'or', file: 'top.v', line: 2 },
      { net: 'y', kind: 'and' },
      { net: 'y', kind: 'output' },
    ]);
  });

  it('lists the nets with most readers, pins and outputs among them', () => {
    const { fanouts } = inspectSmall({
      inputs: ['clk', 'a', 'b'],
      outputs: ['y', 'a'],
      gates: { one: 'one', y: 'and a a b one', z: 'or one one one one one y' },
      registers: { q: { clock: 'clk', data: 'a' }, r: { clock: 'clk', data: 'y', reset: 'a' } },
    });
    expect(fanouts).toEqual([
      { net: 'a', kind: 'input', readers: 5 },
      { net: 'y', kind: 'and', readers: 3 },
      { net: 'clk', kind: 'input', readers: 2 },
      { net: 'b', kind: 'input', readers: 1 },
    ]);
  });

  it('names the nets of a loop', () => {
    const { loops, loopNets, levels } = inspectSmall({
      inputs: ['s', 'r'],
      outputs: ['q', 'y'],
      gates: { q: 'nand s p', p: 'nand r q', y: 'not q', z: 'not s' },
    });
    expect(loops).toBe(1);
    expect(loopNets.map((nets) => [...nets].sort())).toEqual([['p', 'q']]);
    expect(levels).toEqual([3, 1]);
  });

  it('says nothing of logic in an empty circuit', () => {
    const { gates, depth, levels, deepestPath, fanouts, clocks, problems } = inspectSmall({
      inputs: [],
      outputs: [],
    });
    expect({ gates, depth, levels, deepestPath, fanouts, clocks, problems }).toEqual({
      ...{ gates: 0, depth: 0, levels: [0], deepestPath: [], fanouts: [], clocks: [] },
      problems: [],
    });
  });

  it('survives JSON, whatever modules are called', () => {
    const inspection = inspectNetlist(`
      module \\__proto__ (input a, output y); not (y, a); endmodule
      module top (input a, output y); \\__proto__ u (a, y); endmodule`);
    expect(JSON.stringify(inspection.cells)).toBe('{"__proto__":1}');
    expect(JSON.parse(JSON.stringify(inspection))).toEqual(inspection);
  });
});

describe('on random circuits, an inspection', () => {
  const anyCircuit = fc.oneof(
    randomCircuit({ clocking: 'divided', asynchronous: true, latches: true }),
    randomCircuit({ clocking: 'gated', loops: true }),
  );
  const everyInspection = anyCircuit.map((circuit) => inspect(designOf(circuit), []));

  it('counts every gate on one level, and every register on its clock', () =>
    fc.assert(
      fc.property(everyInspection, (found) => {
        const sum = (counts: readonly number[]) => counts.reduce((total, each) => total + each, 0);
        expect(sum(found.levels)).toBe(found.gates);
        expect(sum(Object.values(found.gatesByKind))).toBe(found.gates);
        expect(found.levels.length).toBe(found.depth + 1);
        expect(sum(found.registerDepths)).toBeLessThanOrEqual(found.registers);
        expect(found.registerDepths.length).toBeLessThanOrEqual(found.depth + 1);
        const steps = found.deepestPath.filter(({ kind }) => kind !== 'output').length;
        if (found.depth > 0) expect(steps).toBeGreaterThanOrEqual(found.depth + 1);
        for (const clock of found.clocks) {
          const { registers, direct, buffered, gated, divided, falling } = clock;
          expect(direct + buffered + gated + divided).toBe(registers);
          expect(registers).toBeLessThanOrEqual(found.registers);
          expect(falling).toBeLessThanOrEqual(registers - divided);
        }
      }),
      { seed: SEED, numRuns: 100 },
    ));
});
