import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { powerUpMemory } from '../../compiler/circuit/powerUpMemory.js';
import { designOf } from '../../compiler/compile.js';
import { courseOf, enginesOf } from '../support/engines.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';

const SEED = 20260102;
const CYCLES = 30;

async function expectAgreement(circuit: Circuit, threeValued: boolean, seed: number) {
  const design = designOf(circuit, { threeValued });
  const rows = randomRows(design.layout, seed, CYCLES);
  const state = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
  const mode = threeValued && seed % 2 === 0 ? 'unknown' : 'random';
  const contents = powerUpMemory(circuit.memories, threeValued, mode, seed);
  const { reference, others } = await enginesOf(design);
  const expected = courseOf(reference, state, rows, CYCLES, contents);
  for (const [name, engine] of others) {
    expect(courseOf(engine, state, rows, CYCLES, contents), name).toEqual(expected);
  }
}

async function holdsFor(options: RandomCircuitOptions, threeValued: boolean, numRuns: number) {
  await fc.assert(
    fc.asyncProperty(
      randomCircuit({ maxGates: 25, ...options, memories: true }),
      fc.nat(1e6),
      (circuit, seed) => expectAgreement(circuit, threeValued, seed),
    ),
    { seed: SEED, numRuns },
  );
}

describe('the engines agree on random circuits with memories', () => {
  it('on one edge', () => holdsFor({}, false, 36));
  it('on both edges', () => holdsFor({ clocking: 'edges' }, false, 36));
  it('with gated clocks and latches', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, false, 36));
  it('with divided clocks', () =>
    holdsFor({ clocking: 'divided', latches: true, asynchronous: true }, false, 36));
  it('with two clocks', () => holdsFor({ clocking: 'twoClocks' }, false, 24));
  it('with three values', () => holdsFor({ unknowns: true, asynchronous: true }, true, 36));
  it('with three values on both edges', () => holdsFor({ clocking: 'edges' }, true, 36));
  it('with three values and gated clocks', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true, maxGates: 15 }, true, 15));
  it('with three values and divided clocks', () =>
    holdsFor({ clocking: 'divided', asynchronous: true, maxGates: 10, maxRegisters: 3 }, true, 10));
});
