import fc from 'fast-check';
import { describe, it } from 'vitest';
import type { Circuit } from '../compiler/circuit/circuit.js';
import { designOf } from '../compiler/compile.js';
import { expectAgreement } from './support/agreement.js';
import { randomBanks } from './support/randomBanks.js';
import { type RandomCircuitOptions, randomCircuit } from './support/randomCircuit.js';

const SEED = 20260101;
const CYCLES = 40;

const agrees = (circuit: Circuit, threeValued: boolean, seed: number): Promise<void> =>
  expectAgreement(designOf(circuit, { threeValued }), seed, CYCLES);

async function holdsFor(options: RandomCircuitOptions, threeValued: boolean, numRuns: number) {
  await fc.assert(
    fc.asyncProperty(randomCircuit(options), fc.nat(1e6), (circuit, seed) =>
      agrees(circuit, threeValued, seed),
    ),
    { seed: SEED, numRuns },
  );
}

describe('the engines agree on random circuits', () => {
  it('with registers on one edge', () => holdsFor({}, false, 60));
  it('with wide ports and many gates', () =>
    holdsFor({ maxInputs: 8, maxWidth: 40, maxRegisters: 40, maxGates: 300 }, false, 24));
  it('with asynchronous set and reset', () => holdsFor({ asynchronous: true }, false, 90));
  it('with registers on both edges', () => holdsFor({ clocking: 'edges' }, false, 60));
  it('with gated clocks and latches', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, false, 60));
  it('with divided clocks', () =>
    holdsFor({ clocking: 'divided', latches: true, asynchronous: true }, false, 60));
  it('with banks of registers', () =>
    fc.assert(fc.asyncProperty(randomBanks(), fc.boolean(), fc.nat(1e6), agrees), {
      seed: SEED,
      numRuns: 50,
    }));
  it('with combinational loops', () =>
    holdsFor({ loops: true, latches: true, asynchronous: true, maxGates: 25 }, false, 60));
  it('with combinational loops and three values', () =>
    holdsFor({ loops: true, unknowns: true, maxGates: 15 }, true, 60));
  it('with gated clocks and three values', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, true, 60));
  it('with divided clocks and three values', () =>
    holdsFor({ clocking: 'divided', asynchronous: true }, true, 60));
  it('with three values', () => holdsFor({ unknowns: true, asynchronous: true }, true, 60));
});
