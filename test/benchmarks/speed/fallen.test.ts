import { describe, expect, it } from 'vitest';
import { fallen, fallenText } from '../../../benchmarks/speed/fallen.js';
import { benchResult } from '../../support/benchResults.js';

const recorded = benchResult('c', {
  wasm: 10,
  native: 20,
  nativeMarch: 20,
  bytecode: 100,
  table: 2,
});
const now = (figures: Parameters<typeof benchResult>[1]) =>
  fallen(recorded, benchResult('c', { native: 20, nativeMarch: 20, table: 2, ...figures }));

describe('fallen', () => {
  it('finds nothing where ratios are as they were, better, or a little lower', () => {
    expect(now({})).toEqual([]);
    expect(now({ wasm: 5 })).toEqual([]);
    expect(now({ wasm: 11.7 })).toEqual([]);
  });

  it('does not mind a slower machine', () => {
    const slow = { wasm: 30, native: 60, nativeMarch: 60, bytecode: 300, table: 6 };
    expect(now(slow)).toEqual([]);
  });

  it('finds each ratio that is more than 15 percent lower', () => {
    expect(now({ wasm: 12 }).map(fallenText)).toEqual([
      'c: wasm over native is 1.67, was 2.00',
      'c: wasm over nativeMarch is 1.67, was 2.00',
      'c: wasm over bytecode is 8.33, was 10.00',
    ]);
    expect(now({ table: 3 }).map(fallenText)).toEqual(['c: table over native is 6.67, was 10.00']);
  });

  it('finds an engine that is not there any more', () => {
    const without = benchResult('c', { native: 20, nativeMarch: 20 });
    expect(fallen(recorded, without).map(fallenText)).toEqual([
      'c: table over native is not to be had, was 10.00',
    ]);
    expect(fallen(without, recorded)).toEqual([]);
  });
});
