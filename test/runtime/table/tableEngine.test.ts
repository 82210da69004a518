import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import { compile, designOf } from '../../../compiler/compile.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { RunFault } from '../../../runtime/engine.js';
import { WasmEngine } from '../../../runtime/wasmEngine.js';
import { type RandomCircuitOptions, randomCircuit } from '../../support/randomCircuit.js';
import { randomRows } from '../../support/responses.js';
import { play } from '../../support/rows.js';
import { smallCircuit } from '../../support/smallCircuit.js';
import { bothWays, type Step, storyOf } from '../../support/tableMachines.js';

const SEED = 20260804;
const CYCLES = 1500;
/** Few states and inputs, so that most cycles have been seen before. */
const SMALL = { maxInputs: 2, maxWidth: 2, maxRegisters: 4, maxGates: 20 };

const runs = fc.record({
  do: fc.constant('run' as const),
  cycles: fc.nat(120),
  observed: fc.boolean(),
});
const others = fc.oneof(
  fc.record({ do: fc.constant('hold' as const), cycles: fc.nat(100) }),
  fc.record({ do: fc.constantFrom('look', 'reset', 'save', 'restore') }),
);
const stepsOf = (more: readonly fc.Arbitrary<Step>[]): fc.Arbitrary<Step[]> =>
  fc
    .array(fc.oneof(runs, others, ...more), { maxLength: 10, size: 'max' })
    .map((steps) => [{ do: 'run', cycles: 300, observed: true }, ...steps]);

const SAME_AS_REFERENCE = stepsOf([]);
const SAME_AS_STRAIGHT = stepsOf([fc.record({ do: fc.constant('preview' as const) })]);

const equalsReference = (options: RandomCircuitOptions, threeValued: boolean, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(
      randomCircuit({ ...SMALL, ...options }),
      fc.nat(1e6),
      SAME_AS_REFERENCE,
      async (circuit, seed, steps) => {
        const design = designOf(circuit, { threeValued });
        const rows = randomRows(design.layout, seed, CYCLES);
        const start = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const reference = new ReferenceEngine(circuit, design);
        const { byTable } = await bothWays(design);
        expect(storyOf(byTable, start, rows, steps)).toEqual(
          storyOf(reference, start, rows, steps),
        );
      },
    ),
    { seed: SEED, numRuns },
  );

const equalsStraight = (options: RandomCircuitOptions, threeValued: boolean, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(
      randomCircuit({ ...SMALL, ...options }),
      fc.nat(1e6),
      SAME_AS_STRAIGHT,
      async (circuit, seed, steps) => {
        const design = designOf(circuit, { threeValued });
        const rows = randomRows(design.layout, seed, CYCLES);
        const start = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const { byTable, straight } = await bothWays(design);
        expect(storyOf(byTable, start, rows, steps)).toEqual(storyOf(straight, start, rows, steps));
      },
    ),
    { seed: SEED, numRuns },
  );

describe('an engine that runs by table does what the reference does', () => {
  it('with asynchronous set and reset', () => equalsReference({ asynchronous: true }, false, 36));
  it('with gated clocks and latches', () =>
    equalsReference({ clocking: 'gated', latches: true, maxGates: 12 }, false, 24));
  it('with divided clocks', () => equalsReference({ clocking: 'divided' }, false, 18));
  it('with responses of several words', () =>
    equalsReference({ maxOutputs: 4, maxWidth: 24, maxInputs: 1 }, false, 18));
  it('with three values, of which some inputs are x', () =>
    equalsReference({ unknowns: true, asynchronous: true }, true, 36));
  it('with three values and gated clocks', () =>
    equalsReference({ clocking: 'gated', latches: true, maxGates: 12 }, true, 18));
});

describe('an engine that runs by table does what straight-line code does', () => {
  it('where loops do not settle', () =>
    equalsStraight({ loops: true, latches: true, asynchronous: true }, false, 30));
  it('where a cycle is looked at in advance', () => equalsStraight({}, false, 36));
  it('with three values and loops', () => equalsStraight({ loops: true }, true, 24));
});

describe('a cycle without result', () => {
  const circuit = smallCircuit({
    inputs: ['clk', 'go'],
    outputs: ['q', 'ring'],
    gates: { next: 'not q', ring: 'nand go ring' },
    registers: { q: { clock: 'clk', data: 'next' } },
  });

  it('is one each time, and those before and after it are looked up', async () => {
    const { byTable } = await bothWays(designOf(circuit));
    const faultOf = (rows: readonly string[]): number => {
      try {
        play(byTable, rows);
      } catch (error) {
        if (error instanceof RunFault) return error.completed;
        throw error;
      }
      return -1;
    };
    expect(play(byTable, ['0', '0', '0', '0'])).toEqual(['0 1', '1 1', '0 1', '1 1']);
    expect(faultOf(['0', '0', '0', '1', '0'])).toBe(3);
    expect(byTable.state()[0]).toBe(1);
    expect(faultOf(['1'])).toBe(0);
    expect(play(byTable, ['0', '0'])).toEqual(['1 1', '0 1']);
    expect(faultOf(['0', '1'])).toBe(1);
  });
});

describe('a state that is looked for', () => {
  const circuit = smallCircuit({
    inputs: ['clk'],
    outputs: ['q', 'r'],
    gates: { d: 'not q', e: 'xor q r' },
    registers: { q: { clock: 'clk', data: 'd' }, r: { clock: 'clk', data: 'e' } },
  });

  it('is found by an engine that has run by table', async () => {
    const engine = await WasmEngine.create(
      await compile(designOf(circuit), undefined, { comparesState: true }),
    );
    play(engine, new Array<string>(50).fill(''));
    engine.mark(1);
    expect(play(engine, ['', '', '', '', '', ''])).toEqual([
      '0 1',
      '1 1',
      '0 0',
      '1 0',
      '0 1',
      '1 1',
    ]);
    expect(engine.repeatedAfter).toBe(4);
    engine.mark(3);
    play(engine, new Array<string>(30).fill(''));
    expect(engine.repeatedAfter).toBe(12);
    expect(play(engine, ['', ''])).toEqual(['0 1', '1 1']);
  });
});
