import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { binLabel, binned } from '../../../compiler/report/inspect/bins.js';
import { textPlot } from '../../../compiler/report/inspect/textPlot.js';

const SEED = 20261201;

describe('bins', () => {
  it('are single where there is room, else of a round size', () => {
    expect(binned([9, 1, 2, 3], 1, 3).map(binLabel)).toEqual(['1', '2', '3']);
    expect(binned([9, 1, 2, 3], 1, 2)).toEqual([
      { from: 1, to: 2, count: 3 },
      { from: 3, to: 3, count: 3 },
    ]);
    expect(binned(new Array(101).fill(1), 0, 12).map(binLabel)[1]).toBe('10-19');
  });

  it('lose nothing and stay within their number', () =>
    fc.assert(
      fc.property(
        fc.array(fc.nat(1000), { maxLength: 300 }),
        fc.integer({ min: 1, max: 20 }),
        (counts, most) => {
          const bins = binned(counts, 0, most);
          expect(bins.length).toBeLessThanOrEqual(most);
          const sum = (values: number[]) => values.reduce((total, each) => total + each, 0);
          expect(sum(bins.map(({ count }) => count))).toBe(sum(counts));
          expect(bins.at(-1)?.to ?? -1).toBe(counts.length - 1);
        },
      ),
      { seed: SEED },
    ));
});

describe('a plot of text', () => {
  it('draws each count to one scale', () => {
    expect(textPlot([0, 4, 0, 2], 0, 40)).toEqual([
      '0  0',
      `1  ${'─'.repeat(33)}● 4`,
      '2  0',
      `3  ${'─'.repeat(16)}● 2`,
    ]);
  });
});
