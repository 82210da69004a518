import { expect } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type CompileOptions, designOf } from '../../compiler/compile.js';
import { createEngine } from '../../compiler/engines.js';
import { wasmEngineOf } from '../support/engines.js';
import { firstDifference, randomRows, responseOf } from '../support/responses.js';
import { onEachEngine } from './courses.js';

/** A circuit and how it is clocked. */
export interface Clocked {
  readonly circuit: Circuit;
  readonly options?: CompileOptions;
}

const FEW = 3000;
const MANY = 1_000_000;

/**
 * Expects the same response of two circuits to the same random inputs: over a million cycles of
 * generated code, and over some of every engine.
 */
export async function expectSameResponse(one: Clocked, other: Clocked, seed: number) {
  const first = designOf(one.circuit, one.options);
  const second = designOf(other.circuit, other.options);
  expect(second.layout.inputs).toEqual(first.layout.inputs);
  expect(second.layout.outputs).toEqual(first.layout.outputs);
  const rows = randomRows(first.layout, seed, MANY);
  const few = rows.subarray(0, FEW * first.layout.inputs.words);
  const reference = await createEngine(first, 'reference');
  reference.reset(powerUpState(one.circuit, 'zero'));
  const expected = responseOf(reference, FEW, few);
  for (const design of [first, second]) {
    await onEachEngine(design, 'zero', (engine, name) => {
      const response = responseOf(engine, FEW, few);
      expect(firstDifference(first.layout, response, expected), name).toBeUndefined();
    });
  }
  const [whole, same] = await Promise.all(
    [first, second].map(async (design) => {
      const engine = await wasmEngineOf(design);
      engine.reset(powerUpState(design.circuit, 'zero'));
      return responseOf(engine, MANY, rows);
    }),
  );
  expect(firstDifference(first.layout, same!, whole!)).toBeUndefined();
  // Two circuits that do nothing agree too.
  expect(new Set(whole!.subarray(0, FEW)).size).toBeGreaterThan(100);
}
