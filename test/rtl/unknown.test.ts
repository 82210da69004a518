import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { createEngine, engineNames } from '../../compiler/engines.js';
import type { Engine } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { packValues } from '../support/portValues.js';
import { responseOf } from '../support/responses.js';
import { randomInputs, rtlDesign } from './circuits.js';

/** Modules, what resets them, and whether that resets all of them. */
const modules = [
  { file: 'crossing_table.v', reset: { rst_n: 0 }, isWhole: true },
  { file: 'coin_acceptor.v', reset: { rst: 1 }, isWhole: true },
  { file: 'fifo.v', reset: { rst_n: 0 }, isWhole: false },
  { file: 'storage.v', reset: { rst: 1 }, isWhole: false },
];
const CYCLES = 150;
const RESET = { from: 20, to: 23 };

/** Puts a second group of words behind each row: no bit is x. */
function allKnown(rows: Uint32Array, words: number): Uint32Array {
  const known = new Uint32Array(2 * rows.length);
  for (let at = 0; at < rows.length; at += words) {
    known.set(rows.subarray(at, at + words), 2 * at);
  }
  return known;
}

/** Cycles with an x among the outputs, and those with another known bit than a run without x. */
function comparison({ layout }: Engine, unknown: Uint32Array, known: Uint32Array) {
  const { words } = layout.outputs;
  const stride = rowStride(layout.outputs, true);
  const cyclesWhere = (isSo: (x: number, difference: number) => boolean) =>
    Array.from({ length: CYCLES }, (_, cycle) => cycle).filter((cycle) =>
      Array.from({ length: words }, (_, word) => cycle * stride + word).some((at) => {
        const should = known[at - cycle * (stride - words)]!;
        return isSo(unknown[at + words]!, unknown[at]! ^ should);
      }),
    );
  return {
    unknown: cyclesWhere((x) => x !== 0),
    wrong: cyclesWhere((x, difference) => (difference & ~x) !== 0),
  };
}

describe('a run from an unknown power-up', () => {
  it.each(modules)(
    'knows nothing that some power-up contradicts, and all that reset tells: $file',
    async ({ file, reset, isWhole }) => {
      const design = rtlDesign([file]);
      const ternary = designOf(design.circuit, { threeValued: true });
      const idle = Object.fromEntries(
        Object.entries(reset).map(([port, value]) => [port, 1 - value]),
      );
      const rows = randomInputs(design, 17, CYCLES, (_, chance, cycle) =>
        cycle >= RESET.from && (cycle <= RESET.to || chance(100)) ? reset : idle,
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
          const found = comparison(engine, unknown, known);
          expect(found.wrong, name).toEqual([]);
          expect(found.unknown[0], name).toBe(0);
          if (isWhole) expect(found.unknown.at(-1), name).toBeLessThanOrEqual(RESET.to);
        }
      }
    },
  );
});
