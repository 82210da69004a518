import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layRow } from '../../runtime/layout.js';
import { fillRandomRows, powerUpSeed, RandomBits } from '../../runtime/random.js';

const M32 = 0xffffffffn;
const M64 = 0xffffffffffffffffn;

// The published algorithms, step by step, over BigInt. SplitMix64: Steele, Lea, Flood 2014, fig. 16.
// xoshiro128++: Blackman, Vigna 2021, fig. 3 with the ++ scrambler of section 5 (R = 7; A = 9, B = 11).
function* publishedWords(seed: bigint): Generator<number, never> {
  let x = seed & M64;
  const split = () => {
    x = (x + 0x9e3779b97f4a7c15n) & M64;
    let z = x;
    z = ((z ^ (z >> 30n)) * 0xbf58476d1ce4e5b9n) & M64;
    z = ((z ^ (z >> 27n)) * 0x94d049bb133111ebn) & M64;
    return z ^ (z >> 31n);
  };
  const rotl = (v: bigint, k: bigint) => ((v << k) | (v >> (32n - k))) & M32;
  const first = split();
  const second = split();
  const s = [first & M32, first >> 32n, second & M32, second >> 32n] as [
    bigint,
    bigint,
    bigint,
    bigint,
  ];
  for (;;) {
    yield Number((rotl((s[0] + s[3]) & M32, 7n) + s[0]) & M32);
    const t = (s[1] << 9n) & M32;
    s[2] ^= s[0];
    s[3] ^= s[1];
    s[1] ^= s[2];
    s[0] ^= s[3];
    s[2] ^= t;
    s[3] = rotl(s[3], 11n);
  }
}

const rowOf = (width: number) =>
  layRow([{ name: 'a', width, msb: width - 1, lsb: 0, isVector: true }]);

describe('RandomBits', () => {
  it('draws the words of the published algorithms', () => {
    fc.assert(
      fc.property(fc.bigInt({ min: 0n, max: M64 }), (seed) => {
        const words = new Uint32Array(50);
        new RandomBits(seed).fill(words, 0, 50);
        const published = publishedWords(seed);
        expect(Array.from(words)).toEqual(Array.from(words, () => published.next().value));
      }),
      { seed: 1, numRuns: 20 },
    );
  });

  it('has the SplitMix64 outputs of seed 1234567 as its first state', () => {
    // From memory: the first two outputs printed with many SplitMix64 implementations.
    const [a, b, c, d] = new RandomBits(1234567).save();
    expect(BigInt(b!) * 0x1_0000_0000n + BigInt(a!)).toBe(6457827717110365317n);
    expect(BigInt(d!) * 0x1_0000_0000n + BigInt(c!)).toBe(3203168211198807973n);
  });

  it('takes a number and the same bigint as one seed, modulo 2^64', () => {
    const first = (seed: number | bigint) => new RandomBits(seed).next();
    expect(first(42n)).toBe(first(42));
    expect(first((1n << 64n) + 42n)).toBe(first(42));
    expect(first(-1)).toBe(first(M64));
  });

  it('draws the same words one by one and together', () => {
    const together = new Uint32Array(8);
    new RandomBits(7).fill(together, 2, 6);
    const random = new RandomBits(7);
    expect(Array.from(together)).toEqual([0, 0, ...Array.from({ length: 6 }, () => random.next())]);
  });

  it('goes on from a saved state', () => {
    const random = new RandomBits(3);
    random.next();
    const saved = random.save();
    const expected = [random.next(), random.next()];
    random.restore(saved);
    expect([random.next(), random.next()]).toEqual(expected);
  });

  it('refuses a seed that is no integer and a state that can never leave zero', () => {
    expect(() => new RandomBits(0.5)).toThrow(RangeError);
    expect(() => new RandomBits(2 ** 53)).toThrow(RangeError);
    expect(() => new RandomBits(0).restore(new Uint32Array(4))).toThrow(RangeError);
    expect(() => new RandomBits(0).restore(new Uint32Array(3).fill(1))).toThrow(RangeError);
  });

  it('gives power-up another stream than the stimulus', () => {
    expect(new RandomBits(powerUpSeed(5)).next()).not.toBe(new RandomBits(5).next());
    expect(powerUpSeed(powerUpSeed(5))).toBe(5n);
  });
});

describe('fillRandomRows', () => {
  it('draws ceil(bits / 32) words a row in order and clears the bits beyond', () => {
    const rows = new Uint32Array(6);
    fillRandomRows(new RandomBits(9), rowOf(40), rows, 3, 2);
    const published = publishedWords(9n);
    const expected = Array.from(rows, (_, i) => {
      const word = published.next().value;
      return i % 2 === 1 ? word & 0xff : word;
    });
    expect(Array.from(rows)).toEqual(expected);
  });

  it('makes no bit x: the second group of a wider row is 0', () => {
    const plain = new Uint32Array(6);
    const wide = new Uint32Array(12).fill(0xffffffff);
    fillRandomRows(new RandomBits(9), rowOf(64), plain, 3, 2);
    fillRandomRows(new RandomBits(9), rowOf(64), wide, 3, 4);
    for (let row = 0; row < 3; row++) {
      expect(Array.from(wide.subarray(row * 4, row * 4 + 4))).toEqual([
        plain[row * 2],
        plain[row * 2 + 1],
        0,
        0,
      ]);
    }
  });

  it('draws nothing for a row without bits', () => {
    const random = new RandomBits(1);
    const before = random.save();
    fillRandomRows(random, rowOf(0), new Uint32Array(0), 100, 0);
    expect(random.save()).toEqual(before);
  });
});
