import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { designOf, programsOf } from '../../compiler/compile.js';
import { InterpretedLanes } from '../../compiler/settle/lanes/interpretedLanes.js';
import { SettleRun } from '../../compiler/settle/settleRun.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';

const CYCLES = 16;
const LANES = 12;

/** Elements that the three-valued run knows while a lane has another value. */
function contradictions(circuit: Circuit, seed: number): string[] {
  const design = designOf(circuit);
  const { inputs, stateNames } = design.layout;
  const machine = new InterpretedLanes(programsOf(design), 1);
  const run = new SettleRun(design, machine, LANES, BigInt(seed));
  const rows = randomRows(design.layout, seed, CYCLES);
  const found: string[] = [];
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    run.run(rows, cycle * inputs.words, false);
    const ended = run.runner.faults.map(({ lane }) => lane);
    for (let lane = 0; lane < LANES; lane++) {
      if (ended.includes(lane)) continue;
      run.runner.stateOf(lane).forEach((value, element) => {
        const known = run.state[element]!;
        if (known !== 2 && known !== value) {
          found.push(
            `${stateNames[element]} after ${cycle + 1}: ${known}, ${value} in lane ${lane}`,
          );
        }
      });
    }
  }
  return found;
}

describe('the three-valued run knows nothing that a lane contradicts', () => {
  const kinds: [string, RandomCircuitOptions][] = [
    ['registers on one edge', { unknowns: true, asynchronous: true }],
    ['both edges, latches and gated clocks', { clocking: 'gated', latches: true }],
    ['divided clocks', { clocking: 'divided', asynchronous: true, maxGates: 20 }],
    ['combinational loops', { loops: true, latches: true, asynchronous: true, maxGates: 12 }],
  ];
  it.each(kinds)('with %s', (_, options) => {
    fc.assert(
      fc.property(randomCircuit(options), fc.nat(1e6), (circuit, seed) => {
        expect(contradictions(circuit, seed)).toEqual([]);
      }),
      { seed: 4711, numRuns: 12 },
    );
  });
});
