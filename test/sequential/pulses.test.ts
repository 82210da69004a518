import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { type NetId, NO_NET } from '../../compiler/circuit/ids.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { pulsesOf } from '../../compiler/circuit/pulses.js';
import { designOf } from '../../compiler/compile.js';
import { RunFault } from '../../runtime/engine.js';
import { courseOf, enginesOf } from '../support/engines.js';
import { randomRows } from '../support/responses.js';
import { play } from '../support/rows.js';
import { binary, circuitFrom, expectCourse, onEachEngine, responseTo } from './courses.js';

// What IEEE 1364-2005 makes of these always blocks: an event on a set or reset runs the block as
// one on the clock does, and what it assigns without blocking shows afterwards (9.7.5, 11.4).

describe('a register that resets itself', () => {
  const pulse = circuitFrom(
    `module pulse (input clk, d, output reg p, output reg [2:0] n);
      initial n = 0;
      always @(posedge clk or posedge p) if (p) p <= 0; else p <= d;
      always @(posedge p) n <= n + 1;
    endmodule`,
    'pulse.v',
  );

  it('gives a pulse that others see as a clock', async () => {
    const course = `0 : 0 000
      1 : 0 000
      1 : 0 001 // the pulse is over, and counted
      0 : 0 010
      1 : 0 010
      0 : 0 011`;
    await expectCourse(pulse, course);
    await expectCourse(pulse, course, { threeValued: true, powerUp: 'zero' });
  });

  it('does so as a primitive too', () =>
    expectCourse(
      circuitFrom(`primitive cleared (q, c, d, r); output q; reg q; input c, d, r;
          table ? ? 1:?:0; r 0 ?:?:0; r 1 0:?:1; n ? 0:?:-; ? * 0:?:-; ? ? n:?:-; endtable
        endprimitive
        module t (input clk, d, output p, output reg [1:0] n);
          initial n = 0;
          cleared (p, clk, d, p);
          always @(posedge p) n <= n + 1;
        endmodule`),
      `0 : 0 00
      1 : 0 00
      1 : 0 01
      0 : 0 10`,
    ));

  it('is no loop', () => {
    const { delayed, isGuarded } = pulsesOf(pulse);
    expect(delayed).toEqual([0]);
    expect([...isGuarded]).toEqual([1, 0, 0, 0]);
  });
});

describe('a ripple counter that its own outputs reset', () => {
  /** Counts falling edges; the outputs whose bits are set in `end` clear all stages. */
  const rippleTo = (end: number): Circuit =>
    circuitFrom(`module ripple (input clk, output reg [3:0] q);
      initial q = 0;
      wire clear = &(q | ~4'd${end});
      always @(negedge clk or posedge clear) if (clear) q[0] <= 0; else q[0] <= ~q[0];
      always @(negedge q[0] or posedge clear) if (clear) q[1] <= 0; else q[1] <= ~q[1];
      always @(negedge q[1] or posedge clear) if (clear) q[2] <= 0; else q[2] <= ~q[2];
      always @(negedge q[2] or posedge clear) if (clear) q[3] <= 0; else q[3] <= ~q[3];
    endmodule`);

  // Also the ones in which a stage that is cleared gives the next one an edge.
  it.each([3, 5, 6, 7, 9, 10, 11, 12, 13, 14])('counts modulo %s', async (end) => {
    const rows = new Array<string>(2 * end + 3).fill('');
    const expected = rows.map((_, i) => binary(i % end, 4));
    const circuit = rippleTo(end);
    for (const options of [{}, { threeValued: true, powerUp: 'zero' as const }]) {
      expect(await responseTo(circuit, rows, options)).toEqual(expected);
    }
  });
});

describe('two registers that reset each other', () => {
  it('tell which of two inputs rises first', () =>
    expectCourse(
      circuitFrom(`module detector (input a, b, output reg up, down, output reg [1:0] both);
        initial {up, down, both} = 0;
        wire clear = up & down;
        always @(posedge a or posedge clear) if (clear) up <= 0; else up <= 1;
        always @(posedge b or posedge clear) if (clear) down <= 0; else down <= 1;
        always @(posedge clear) both <= both + 1;
      endmodule`),
      `0 0 : 0 0 00
      1 0 : 1 0 00
      1 1 : 0 0 01
      0 0 : 0 0 01
      0 1 : 0 1 01
      1 1 : 0 0 10
      0 0 : 0 0 10
      1 1 : 0 0 11`,
      { clocks: [] },
    ));
});

describe('a register that sets and resets itself in turn', () => {
  const restless = circuitFrom(
    `module restless (input clk, run, output reg p);
      wire set = run & ~p;
      always @(posedge clk or posedge set or posedge p)
        if (p) p <= 0; else if (set) p <= 1; else p <= 0;
    endmodule`,
    'restless.v',
  );

  it('ends the run in the cycle in which it starts, with its name and place', async () => {
    await onEachEngine(designOf(restless), 'zero', (engine, name) => {
      let fault: unknown;
      try {
        play(engine, ['0', '0', '1', '0']);
      } catch (error) {
        fault = error;
      }
      expect(fault, name).toBeInstanceOf(RunFault);
      expect((fault as RunFault).completed, name).toBe(2);
      expect((fault as RunFault).message, name).toMatch(/p \(restless\.v:/);
    });
  });

  it('is x in a three-valued run, until it is stopped and clocked', () =>
    expectCourse(restless, '0 : 0\n0 : 0\n1 : x\n1 : x\n0 : x\n0 : 0', {
      threeValued: true,
      powerUp: 'zero',
    }));
});

const pick = fc.nat(999);
const control = fc.option(pick, { freq: 2 });
const recipes = fc.record({
  registers: fc.array(
    fc.record({
      data: pick,
      clock: fc.option(pick, { freq: 1 }),
      edge: fc.nat(1),
      set: control,
      reset: control,
      priority: fc.nat(2),
    }),
    { minLength: 1, maxLength: 5, size: 'max' },
  ),
  gates: fc.array(
    fc.record({
      kind: fc.constantFrom(GateKind.And, GateKind.Or, GateKind.Xor, GateKind.Nand),
      pins: fc.tuple(pick, pick),
    }),
    { minLength: 1, maxLength: 7, size: 'max' },
  ),
});

/** Registers with clocks, sets and resets of all there is, their own outputs included. */
function circuitOf({ registers, gates }: typeof recipes extends fc.Arbitrary<infer R> ? R : never) {
  const builder = new CircuitBuilder();
  const [clk, ...inputs] = Array.from({ length: 4 }, () => builder.net()) as [NetId, ...NetId[]];
  builder.input('clk', [clk]);
  for (const [i, net] of inputs.entries()) builder.input(`i${i}`, [net]);
  const outputs = registers.map(() => builder.net());
  const nets = [...inputs, ...outputs];
  const at = (choice: number | null): NetId =>
    choice === null ? NO_NET : nets[choice % nets.length]!;
  for (const { kind, pins } of gates) nets.push(builder.gate(kind, pins.map(at)));
  for (const [r, { data, clock, edge, set, reset, priority }] of registers.entries()) {
    const pins = { data: at(data), edge, set: at(set), reset: at(reset), priority };
    builder.register({ output: outputs[r]!, clock: clock === null ? clk : at(clock), ...pins });
  }
  builder.output('o', nets);
  return builder.finish('random');
}

describe('random circuits with registers that set and reset themselves', () => {
  it.each([
    ['two values', false, 60],
    ['three values', true, 10],
  ] as const)('run alike on all engines with %s', (_, threeValued, numRuns) =>
    fc.assert(
      fc.asyncProperty(recipes, fc.nat(1e6), async (recipe, seed) => {
        const circuit = circuitOf(recipe);
        fc.pre(pulsesOf(circuit).delayed.length > 0);
        const design = designOf(circuit, { threeValued, clocks: ['clk'] });
        const rows = randomRows(design.layout, seed, 30);
        const state = powerUpState(circuit, threeValued ? 'zero' : 'random', seed);
        const { reference, others } = await enginesOf(design);
        const expected = courseOf(reference, state, rows, 30);
        for (const [name, engine] of others) {
          expect(courseOf(engine, state, rows, 30), name).toEqual(expected);
        }
      }),
      { seed: 20260307, numRuns },
    ),
  );
});
