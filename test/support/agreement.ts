import { expect } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import type { Design } from '../../compiler/compile.js';
import { courseOf, enginesOf } from './engines.js';
import { randomRows } from './responses.js';

/**
 * Runs a design on all engines with the same random inputs, from an unknown power-up where it has
 * three values and else from a random one, and expects the response and state of the reference.
 */
export async function expectAgreement(design: Design, seed: number, cycles: number): Promise<void> {
  const rows = randomRows(design.layout, seed, cycles);
  const mode = design.layout.threeValued ? 'unknown' : 'random';
  const state = powerUpState(design.circuit, mode, seed);
  const { reference, others } = await enginesOf(design);
  const expected = courseOf(reference, state, rows, cycles);
  for (const [name, engine] of others) {
    expect(courseOf(engine, state, rows, cycles), name).toEqual(expected);
  }
}
