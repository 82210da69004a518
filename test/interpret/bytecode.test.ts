import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf, programsOf } from '../../compiler/compile.js';
import { bytecodeOf } from '../../compiler/interpret/bytecode.js';
import { firstResult, operandCount, type Program } from '../../compiler/program/program.js';
import { randomCircuit } from '../support/randomCircuit.js';

const SEED = 20260203;

const programs = randomCircuit({ maxGates: 120 }).map(
  (circuit) => programsOf(designOf(circuit)).programs[0]!,
);

const holds = (law: (program: Program) => void) =>
  fc.assert(fc.property(programs, law), { seed: SEED, numRuns: 60 });

/** Operation and operands of each operation of the bytecode. */
function operationsOf(program: Program): { op: number; operands: number[] }[] {
  const { runs, operands } = bytecodeOf(program);
  const operations: { op: number; operands: number[] }[] = [];
  let at = 0;
  for (let run = 0; run < runs.length; run += 2) {
    const op = runs[run]!;
    for (let i = 0; i < runs[run + 1]!; i++, at += operandCount[op]!) {
      operations.push({ op, operands: Array.from(operands.slice(at, at + operandCount[op]!)) });
    }
  }
  expect(at).toBe(operands.length);
  return operations;
}

describe('bytecode', () => {
  it('reads only values that are there before', () =>
    holds((program) => {
      const first = firstResult(program);
      for (const [place, { operands }] of operationsOf(program).entries()) {
        for (const value of operands) expect(value).toBeLessThan(first + place);
      }
    }));

  it('is the same operations on the same values under new numbers', () =>
    holds((program) => {
      const { renumbered } = bytecodeOf(program);
      const operations = operationsOf(program);
      const first = firstResult(program);
      expect(operations.length).toBe(program.op.length);
      program.op.forEach((op, i) => {
        const operands = [program.a[i]!, program.b[i]!, program.c[i]!]
          .slice(0, operandCount[op]!)
          .map((value) => renumbered[value]!);
        expect(operations[renumbered[first + i]! - first]).toEqual({ op, operands });
      });
    }));

  it('leaves the numbers of constants, inputs and state as they are', () =>
    holds((program) => {
      const { renumbered } = bytecodeOf(program);
      for (let value = 0; value < firstResult(program); value++) {
        expect(renumbered[value]).toBe(value);
      }
    }));

  it('never has two runs of one kind in a row', () =>
    holds((program) => {
      const { runs } = bytecodeOf(program);
      for (let run = 2; run < runs.length; run += 2) expect(runs[run]).not.toBe(runs[run - 2]);
    }));
});
