import { describe, expect, it } from 'vitest';
import { checkAgreement, EngineDisagreement } from '../../compiler/report/benchAgreement.js';
import type { Contestant } from '../../compiler/report/benchEngines.js';
import type { BenchEngine } from '../../compiler/report/benchResult.js';
import { layRow, type ModelLayout } from '../../runtime/layout.js';

const port = (name: string, width: number, msb = 0, lsb = 0, isVector = false) => ({
  name,
  width,
  msb,
  lsb,
  isVector,
});

/** Outputs of 1 + 32 + 4 bits: two words a row. */
const layout: ModelLayout = {
  name: 'three ports',
  threeValued: false,
  clocks: [],
  inputs: layRow([]),
  outputs: layRow([port('a', 1), port('v', 32, 31, 0, true), port('w', 4, 3, 6, true)]),
  stateNames: [],
  memories: [],
};

const giving = (name: BenchEngine, ...words: number[]): Contestant => ({
  name,
  buildMs: 0,
  respond: async () => Uint32Array.from(words),
  time: async () => 1,
});

const wasm = giving('wasm', 1, 2, 3, 4);

describe('the comparison of responses', () => {
  it('tells in how many cycles each engine was compared', async () => {
    const others = [giving('bytecode', 1, 2, 3, 4), giving('reference', 1, 2)];
    expect(await checkAgreement(layout, [wasm, ...others], 2)).toEqual({
      bytecode: 2,
      reference: 1,
    });
  });

  it.each([
    ['a in cycle 0', [0, 2, 3, 4]],
    ['v[0] in cycle 1', [1, 2, 1, 4]],
    ['v[31] in cycle 0', [1, 3, 3, 4]],
    ['w[5] in cycle 1', [1, 2, 3, 0]],
  ])('names %s as the first difference', async (place, words) => {
    const failing = checkAgreement(layout, [wasm, giving('native', ...words)], 2);
    await expect(failing).rejects.toThrow(EngineDisagreement);
    await expect(failing).rejects.toThrow(`wasm and native disagree on ${place};`);
  });

  it('holds for a circuit without outputs', async () => {
    const silent = { ...layout, outputs: layRow([]) };
    expect(await checkAgreement(silent, [giving('wasm'), giving('native')], 7)).toEqual({
      native: 7,
    });
  });
});
