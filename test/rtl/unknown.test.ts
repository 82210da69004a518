import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { createEngine, engineNames } from '../../compiler/engines.js';
import type { Engine } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { packValues } from '../support/portValues.js';
import { responseOf } from '../support/responses.js';
import { randomInputs, rtlDesign } from './circuits.js';

const modules = [
  { file: 'crossing_onehot.v', reset: { rst_n: 0 } },
  { file: 'crossing_table.v', reset: { rst_n: 0 } },
  { file: 'coin_acceptor.v', reset: { rst: 1 } },
  { file: 'fifo.v', reset: { rst_n: 0 } },
  { file: 'processor.v', reset: { rst_n: 0 } },
  { file: 'storage.v', reset: { rst: 1 } },
  { file: 'hierarchy.v', reset: { rst_n: 0 } },
];
const CYCLES = 200;
const RESET = 3;

/** Puts a second group of words behind each row: no bit is x. */
function allKnown(rows: Uint32Array, words: number): Uint32Array {
  const known = new Uint32Array(2 * rows.length);
  for (let at = 0; at < rows.length; at += words) {
    known.set(rows.subarray(at, at + words), 2 * at);
  }
  return known;
}

/** Bits that are x, and the others where they differ from a two-valued run. */
function comparison(engine: Engine, unknown: Uint32Array, known: Uint32Array) {
  const { outputs } = engine.layout;
  const stride = rowStride(outputs, true);
  let unknowns = 0;
  let wrong = 0;
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    for (let word = 0; word < outputs.words; word++) {
      const x = unknown[cycle * stride + outputs.words + word]!;
      const difference = unknown[cycle * stride + word]! ^ known[cycle * outputs.words + word]!;
      unknowns += x.toString(2).replaceAll('0', '').length;
      if (difference & ~x) wrong++;
    }
  }
  return { unknowns, wrong };
}

describe('a run from an unknown power-up', () => {
  it.each(modules)(
    'knows nothing that some power-up contradicts: $file',
    async ({ file, reset }) => {
      const design = rtlDesign([file]);
      const ternary = designOf(design.circuit, { threeValued: true });
      const idle = Object.fromEntries(
        Object.entries(reset).map(([port, value]) => [port, 1 - value]),
      );
      const rows = randomInputs(design, 17, CYCLES, (_, chance, cycle) =>
        cycle >= 20 && (cycle < 20 + RESET || chance(100)) ? reset : idle,
      );
      const stimulus = packValues(design.layout, rows);
      const responses: Uint32Array[] = [];
      for (const mode of ['zero', 'one', 'random'] as const) {
        const engine = await createEngine(design, 'bytecode');
        engine.reset(powerUpState(design.circuit, mode, 18));
        responses.push(responseOf(engine, CYCLES, stimulus));
      }
      for (const name of engineNames) {
        const engine = await createEngine(ternary, name);
        engine.reset(powerUpState(design.circuit, 'unknown'));
        const unknown = responseOf(engine, CYCLES, allKnown(stimulus, ternary.layout.inputs.words));
        for (const known of responses) {
          const { unknowns, wrong } = comparison(engine, unknown, known);
          expect([name, wrong]).toEqual([name, 0]);
          console.log(file, name, unknowns);
        }
      }
    },
  );
});
