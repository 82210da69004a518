import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';

describe('RandomBits', () => {
  it('passes over words as if they had been drawn', () => {
    fc.assert(
      fc.property(fc.bigInt(0n, 2n ** 64n - 1n), fc.nat(3000), (seed, count) => {
        const drawn = new RandomBits(seed);
        const skipped = new RandomBits(seed);
        drawn.fill(new Uint32Array(count), 0, count);
        skipped.skip(BigInt(count));
        expect(skipped.save()).toEqual(drawn.save());
      }),
      { seed: 20260421, numRuns: 40 },
    );
  });

  it('passes over any number of words, in parts as at once', () => {
    const whole = new RandomBits(4);
    const parts = new RandomBits(4);
    whole.skip(10n ** 18n + 12345n);
    parts.skip(10n ** 18n);
    parts.skip(12345n);
    expect(parts.save()).toEqual(whole.save());
  });

  it('comes to its start again after 2^128 - 1 words', () => {
    // The period is that of the publication which `RandomBits` names.
    const random = new RandomBits(1);
    const start = random.save();
    random.skip(2n ** 128n - 1n);
    expect(random.save()).toEqual(start);
  });
});
