import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf, programsOf } from '../../compiler/compile.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { rowStride } from '../../runtime/layout.js';
import { courseOf, wasmEngineOf } from '../support/engines.js';
import { randomRows } from '../support/responses.js';
import { reading } from './circuits.js';
import { randomArrayText } from './randomTexts.js';

const SEED = 20260103;
const CYCLES = 40;

/** The design of a text with its array held as a memory, or built from registers. */
function designsOf(text: string, threeValued: boolean) {
  const [held, exploded] = [1, 65537].map((memoriesFrom) => {
    const { circuit, messages } = reading(text, { memoriesFrom });
    expect(messages.filter((message) => message.includes('error'))).toEqual([]);
    return designOf(circuit!, { threeValued });
  });
  return { held: held!, exploded: exploded! };
}

async function expectSame(text: string, threeValued: boolean, seed: number) {
  const { held, exploded } = designsOf(text, threeValued);
  // An array of which only constants name the words is none.
  fc.pre(held.layout.memories.length === 1);
  expect(exploded.layout.memories).toHaveLength(0);
  const rows = randomRows(held.layout, seed, CYCLES);
  const { inputs } = held.layout;
  // Where nothing is x, both know all; where an address is, registers may know more.
  if (threeValued) {
    const stride = rowStride(inputs, true);
    for (let at = inputs.words; at < rows.length; at += stride) rows.fill(0, at, at + inputs.words);
  }
  const state = powerUpState(exploded.circuit, 'zero');
  const expected = courseOf(new ReferenceEngine(exploded.circuit, exploded), state, rows, CYCLES);
  const engines = [
    new ReferenceEngine(held.circuit, held),
    new BytecodeEngine(programsOf(held), held.layout),
    await wasmEngineOf(held),
  ];
  for (const engine of engines) {
    const start = powerUpState(held.circuit, 'zero');
    expect(courseOf(engine, start, rows, CYCLES).response).toEqual(expected.response);
  }
}

describe('an array of variables', () => {
  it.each([false, true])('does the same as a memory and as registers, three values: %s', (three) =>
    fc.assert(
      fc.asyncProperty(randomArrayText(), fc.nat(1e6), (text, seed) =>
        expectSame(text, three, seed),
      ),
      { seed: SEED, numRuns: three ? 25 : 60 },
    ),
  );
});
