import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../compiler/circuit/circuit.js';
import { powerUpState } from '../compiler/circuit/powerUp.js';
import { designOf } from '../compiler/compile.js';
import { rowStride } from '../runtime/layout.js';
import { courseOf, enginesOf } from './support/engines.js';
import { circuitWithNotes, primitiveNetlist } from './support/primitiveTable.js';
import { type RandomCircuitOptions, randomCircuit } from './support/randomCircuit.js';
import { randomRows } from './support/responses.js';

const SEED = 20260417;
const CYCLES = 24;

/** Stops each engine in the middle and lets every engine go on from there. */
async function expectSameAfter(
  circuit: Circuit,
  threeValued: boolean,
  pace: boolean,
  seed: number,
  middle: number,
) {
  const timings = [
    { port: 'clk', period: 2, offset: 0 },
    { port: 'clk2', period: 3, offset: 1 },
  ];
  const design = designOf(circuit, { threeValued, ...(pace && { timings }) });
  const { inputs, outputs } = design.layout;
  const rows = randomRows(design.layout, seed, CYCLES);
  const state = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
  const { reference, others } = await enginesOf(design);
  const whole = courseOf(reference, state, rows, CYCLES);
  // Where a cycle has no result there is nothing to go on to.
  if (whole.cycles < CYCLES) return;
  const engines = [['reference', reference] as const, ...others];
  const [inputWords, outputWords] = [inputs, outputs].map((row) => rowStride(row, threeValued));
  for (const [first, engine] of engines) {
    engine.reset(state);
    engine.run(middle, rows, inputWords!, undefined);
    const point = engine.save();
    for (const [second, other] of engines) {
      const rest = CYCLES - middle;
      const response = new Uint32Array(rest * outputWords!);
      other.restore(point);
      other.run(rest, rows.subarray(middle * inputWords!), inputWords!, response);
      const from = `${first} saves, ${second} goes on`;
      expect(response, from).toEqual(whole.response.slice(middle * outputWords!));
      expect(other.state(), from).toEqual(whole.state);
    }
  }
}

/** Primitives whose tables are no flip-flops; the second and third as in IEEE 1364-2005, clause 8. */
const tables = [
  'r 0:?:0; r 1:?:1; f 0:?:0; f 1:?:1; ? *:?:-;',
  '1 0:?:1; f 0:1:-; 0 r:?:0; 0 f:0:-; 1 1:?:0;',
  `? ? ? 0 1:?:1; ? ? ? * 1:1:1; ? ? ? 1 0:?:0; ? ? ? 1 *:0:0; r 0 0 0 0:0:1;
    r 0 0 1 1:?:-; r 0 1 1 1:?:0; r 1 0 1 1:?:1; r 1 1 1 1:0:1; r 1 1 1 1:1:0; f ? ? ? ?:?:-;
    b * ? ? ?:?:-; b ? * ? ?:?:-;`,
  '* 0:?:-; ? r:?:1; 1 1:?:1; 0 n:?:-;',
];

const holdsFor = (options: RandomCircuitOptions, threeValued: boolean, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(randomCircuit(options), fc.nat(1e6), fc.nat(CYCLES), (circuit, seed, middle) =>
      expectSameAfter(circuit, threeValued, options.clocking === 'twoClocks', seed, middle),
    ),
    { seed: SEED, numRuns },
  );

describe('a run goes on from a saved point as if it had not been stopped', () => {
  it('with asynchronous set and reset on both edges', () =>
    holdsFor({ asynchronous: true, clocking: 'edges' }, false, 12));
  it('with gated clocks and latches', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, false, 12));
  it('with divided clocks', () =>
    holdsFor({ clocking: 'divided', latches: true, asynchronous: true }, false, 12));
  it('with clocks of their own pace', () =>
    holdsFor({ clocking: 'twoClocks', latches: true, asynchronous: true }, false, 12));
  it('with combinational loops', () =>
    holdsFor({ loops: true, latches: true, asynchronous: true, maxGates: 20 }, false, 15));
  it('with memories', () => holdsFor({ memories: true, clocking: 'edges' }, false, 15));
  it('with three values and memories', () =>
    holdsFor({ memories: true, clocking: 'gated' }, true, 10));
  it('with primitives that run from their tables', async () => {
    for (const table of tables) {
      const inputs = table.split(':')[0]!.trim().split(' ').length;
      const circuit = circuitWithNotes(primitiveNetlist(table, inputs, true));
      for (const threeValued of [false, true]) {
        for (const [seed, middle] of [1, 7, 12].entries()) {
          await expectSameAfter(circuit, threeValued, false, seed, middle);
        }
      }
    }
  });
  it('with three values and loops', () =>
    holdsFor({ loops: true, unknowns: true, maxGates: 15 }, true, 12));
  it('with three values and gated clocks', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, true, 12));
  it('with three values and divided clocks', () =>
    holdsFor({ clocking: 'divided', asynchronous: true }, true, 12));
});
