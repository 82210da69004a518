import { describe, expect, it } from 'vitest';
import { bitWeights } from '../../runtime/node/bitWeights.js';
import { RandomBits } from '../../runtime/random.js';
import { randomStimulus } from '../../runtime/stream.js';
import { type WeightedOptions, weightedStimulus } from '../../runtime/weightedStimulus.js';
import { rowsOf } from '../support/stimulusRows.js';
import { layoutOf } from '../support/tables.js';

const layout = layoutOf(['a', 'v[39:0]', 'b'], []);

const rows = (cycles: number, options?: WeightedOptions): Promise<string[]> =>
  rowsOf(weightedStimulus(layout, 5, cycles, options), layout);

const weigh = (weights: Record<string, number>): WeightedOptions => ({
  weights: bitWeights(layout, new Map(Object.entries(weights))),
});

describe('weightedStimulus', () => {
  it('is the plain random stimulus where nothing is held or weighted', async () => {
    expect(await rows(5000)).toEqual(await rowsOf(randomStimulus(layout, 5, 5000), layout));
  });

  it('holds each row, and cuts the last', async () => {
    const fresh = await rows(4);
    for (const hold of [3, 17]) {
      const expected = fresh.flatMap((row) => new Array<string>(hold).fill(row)).slice(0, -2);
      expect(await rows(4 * hold - 2, { hold })).toEqual(expected);
    }
  });

  it('draws a word for each weighted bit behind the words of the row', async () => {
    const random = new RandomBits(5);
    const expected = Array.from({ length: 300 }, () => {
      const low = random.next();
      const high = random.next() & 0x3ff;
      const [first, second] = [random.next(), random.next()];
      const bits = [...Array(32).keys()].map((i) => (low >>> i) & 1);
      bits.push(...[...Array(10).keys()].map((i) => (high >>> i) & 1));
      // v[39] is bit 40 of the row and b bit 41.
      bits[40] = first < 0.25 * 2 ** 32 ? 1 : 0;
      bits[41] = second < 0.9 * 2 ** 32 ? 1 : 0;
      return `${bits[0]} ${bits.slice(1, 41).reverse().join('')} ${bits[41]}`;
    });
    expect(await rows(300, weigh({ b: 0.9, 'v[39]': 0.25 }))).toEqual(expected);
  });

  it('makes bits of weight 0 and 1 constant, and others as often 1 as said', async () => {
    const texts = await rows(20_000, weigh({ a: 0, b: 1, 'v[7:0]': 0.1 }));
    const ones = texts.reduce((sum, row) => sum + (row.slice(34, 42).match(/1/g)?.length ?? 0), 0);
    expect(texts.every((row) => row.startsWith('0') && row.endsWith('1'))).toBe(true);
    // 160,000 bits: four standard deviations are 480.
    expect(Math.abs(ones - 16_000)).toBeLessThan(480);
  });

  it('has no x in a three-valued model', async () => {
    const three = layoutOf(['a', 'v[39:0]', 'b'], [], { threeValued: true });
    const options = weigh({ a: 0.5 });
    const seen = await rowsOf(weightedStimulus(three, 5, 50, options), three);
    expect(seen).toEqual(await rows(50, options));
  });

  it('refuses what makes no sense', () => {
    const first = (options: WeightedOptions) => () =>
      weightedStimulus(layout, 5, 1, options).next();
    expect(first({ hold: 0 })).toThrow('hold is a whole number from 1 on, got 0');
    const weight = { offset: 0, width: 1, probability: 2 };
    expect(first({ weights: [weight] })).toThrow('a probability is from 0 to 1, got 2');
    const even = { ...weight, probability: 0.5 };
    expect(first({ weights: [even, even] })).toThrow('input bit 0 is weighted twice');
    expect(() => weigh({ q: 1 })).toThrow('no such port: q');
    expect(() => weigh({ v: 1, 'v[3]': 1 })).toThrow('v[3] shares bits with v');
    const clocked = { ...layout, clocks: ['clk'] };
    expect(() => bitWeights(clocked, new Map([['clk', 1]]))).toThrow('clk is a clock');
  });
});
