import { describe, expect, it } from 'vitest';
import type { Contestant } from '../../compiler/report/benchEngines.js';
import { BURSTS, timeAlternately } from '../../compiler/report/benchTiming.js';

/** An engine whose pace is set: nanoseconds a cycle in each call, the last one for good. */
function paced(name: 'wasm' | 'native', paces: readonly number[], calls: string[]): Contestant {
  let call = 0;
  return {
    name,
    buildMs: 0,
    respond: async () => new Uint32Array(0),
    time: async (cycles) => {
      calls.push(name);
      return cycles * paces[Math.min(call++, paces.length - 1)]!;
    },
  };
}

const options = { seconds: 0.009, rounds: 3, onProgress: () => {} };

describe('the timing', () => {
  it('gives each engine as many cycles as fill its time', async () => {
    const [fast, slow] = await timeAlternately(
      [paced('wasm', [10], []), paced('native', [1000], [])],
      options,
    );
    expect(fast).toEqual({ nsPerCycle: 10, fastest: 10, slowest: 10, best: 10, cycles: 900_000 });
    const figures = { nsPerCycle: 1000, fastest: 1000, slowest: 1000, best: 1000 };
    expect(slow).toEqual({ ...figures, cycles: 9000 });
  });

  it('takes the engines in turn', async () => {
    const calls: string[] = [];
    await timeAlternately([paced('wasm', [10], calls), paced('native', [10], calls)], options);
    const turns = ['wasm', 'native'];
    expect(calls.slice(-6)).toEqual([...turns, ...turns, ...turns]);
  });

  it('warms up until an engine grows no faster', async () => {
    const growing = Array.from({ length: 30 }, (_, i) => 1000 * 0.9 ** i);
    const [timing] = await timeAlternately([paced('wasm', growing, [])], options);
    expect(timing!.slowest).toBeCloseTo(growing[29]!, 1);
  });

  it('takes the median of the rounds', async () => {
    const calls: string[] = [];
    await timeAlternately([paced('wasm', [10], calls)], options);
    const before = new Array<number>(calls.length - BURSTS - 3).fill(10);
    const paces = [...before, 40, 12, 11];
    const [timing] = await timeAlternately([paced('wasm', paces, [])], options);
    expect(timing).toMatchObject({ nsPerCycle: 12, fastest: 11, slowest: 40 });
  });

  it('takes the best of the bursts behind the rounds', async () => {
    const calls: string[] = [];
    await timeAlternately([paced('wasm', [10], calls)], options);
    const before = new Array<number>(calls.length - BURSTS).fill(10);
    const paces = [...before, 30, 7, 30];
    const [timing] = await timeAlternately([paced('wasm', paces, [])], options);
    expect(timing).toMatchObject({ nsPerCycle: 10, fastest: 10, best: 7 });
  });

  it('runs one cycle a round where that alone takes longer', async () => {
    const [timing] = await timeAlternately([paced('native', [1e9], [])], options);
    expect(timing!.cycles).toBe(3);
  });
});
