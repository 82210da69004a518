import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf, packedProgramsOf } from '../../../compiler/compile.js';
import { randomWords, simulate } from '../../../compiler/logic/simulate.js';
import { findAdditions } from '../../../compiler/passes/additions/additions.js';
import { compact } from '../../../compiler/passes/compact.js';
import { isNumber, VectorOp } from '../../../compiler/program/vectorCode.js';
import { expectAgreement } from '../../support/agreement.js';
import { logicOf } from '../../support/logic.js';
import { randomSums } from '../../support/randomSums.js';

const CYCLES = 30;

describe('findAdditions', () => {
  it('finds numbers that add up to the bits of their sum', () => {
    let found = 0;
    fc.assert(
      fc.property(randomSums(), fc.boolean(), (circuit, threeValued) => {
        const logic = compact(logicOf(circuit, { threeValued }));
        const value = new Int32Array(logic.nodeCount);
        const random = randomWords();
        simulate(logic, value, random);
        const bit = (literal: number, trial: number): bigint =>
          BigInt(((value[literal >>> 1]! >>> trial) ^ literal) & 1);
        for (const { width, words, constant, sum } of findAdditions(logic)) {
          found++;
          for (let trial = 0; trial < 32; trial++) {
            let total = constant;
            for (const word of words) {
              for (const [i, literal] of word.entries()) total += bit(literal, trial) << BigInt(i);
            }
            expect(sum.length).toBe(width);
            for (const [i, literal] of sum.entries()) {
              if (literal >= 0) expect((total >> BigInt(i)) & 1n).toBe(bit(literal, trial));
            }
          }
        }
      }),
      { seed: 3, numRuns: 40 },
    );
    expect(found).toBeGreaterThan(30);
  });
});

describe('programs with additions', () => {
  it('give the response and the state of the reference', async () => {
    const seen = new Map<number, number>();
    const agrees = fc.asyncProperty(
      randomSums(),
      fc.boolean(),
      fc.nat(1e6),
      async (circuit, threeValued, seed) => {
        const design = designOf(circuit, { threeValued });
        for (const { op } of packedProgramsOf(design).programs[0]!.vectors?.steps ?? []) {
          if (isNumber(op)) seen.set(op, (seen.get(op) ?? 0) + 1);
        }
        await expectAgreement(design, seed, CYCLES);
      },
    );
    await fc.assert(agrees, { seed: 5, numRuns: 20 });
    // The law says nothing about operations that no circuit has.
    expect([...seen.keys()].sort((p, q) => p - q)).toEqual(
      Object.values(VectorOp).filter(isNumber),
    );
  });
});
