import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { anyBit, readBits, writeBits } from '../../runtime/rowBits.js';
import { formatValue } from '../../runtime/valueText.js';

describe('row bits', () => {
  it('read back as they were written and leave their neighbours alone', () => {
    const place = fc.record({
      bit: fc.nat(90),
      count: fc.integer({ min: 1, max: 32 }),
      bits: fc.integer({ min: 0, max: 0xffffffff }),
      fill: fc.integer({ min: 0, max: 0xffffffff }),
    });
    fc.assert(
      fc.property(place, ({ bit, count, bits, fill }) => {
        const rows = new Uint32Array(6).fill(fill);
        const before = Array.from({ length: 160 }, (_, i) => readBits(rows, 1, i, 1));
        writeBits(rows, 1, bit, count, bits);
        expect(readBits(rows, 1, bit, count)).toBe(count === 32 ? bits : bits % 2 ** count);
        const after = Array.from({ length: 160 }, (_, i) => readBits(rows, 1, i, 1));
        before.splice(bit, count, ...after.slice(bit, bit + count));
        expect(after).toEqual(before);
        expect(rows[0]).toBe(fill);
      }),
      { seed: 4, numRuns: 300 },
    );
  });

  it('are looked through as one range', () => {
    const rows = Uint32Array.of(0, 0, 1 << 5);
    expect(anyBit(rows, 0, 0, 69)).toBe(false);
    expect(anyBit(rows, 0, 0, 70)).toBe(true);
    expect(anyBit(rows, 1, 37, 1)).toBe(true);
  });
});

describe('formatValue', () => {
  const format = (width: number, value: bigint, unknown?: bigint, offset = 0) => {
    const rows = new Uint32Array(8);
    const put = (bits: bigint, at: number) => {
      for (let i = 0; i < width; i++)
        writeBits(rows, at, offset + i, 1, Number((bits >> BigInt(i)) & 1n));
    };
    put(value, 0);
    if (unknown === undefined) return formatValue({ offset, width }, rows, 0, undefined);
    put(unknown, 4);
    return formatValue({ offset, width }, rows, 0, 4);
  };

  it('writes one bit as a digit and more as all their hexadecimal digits', () => {
    expect([format(1, 0n), format(1, 1n)]).toEqual(['0', '1']);
    expect(format(2, 3n)).toBe('0x3');
    expect(format(5, 3n)).toBe('0x03');
    expect(format(32, 0xdeadbeefn)).toBe('0xdeadbeef');
    expect(format(33, 0x1_0000_000fn)).toBe('0x10000000f');
    expect(format(70, 0x2a_0123_4567_89ab_cdefn)).toBe('0x2a0123456789abcdef');
  });

  it('writes all bits where one is x', () => {
    expect(format(1, 0n, 1n)).toBe('x');
    expect(format(4, 0b1001n, 0b0100n)).toBe('0b1x01');
    expect(format(4, 0b1001n, 0n)).toBe('0x9');
  });

  it('agrees with BigInt at any place of a row', () => {
    fc.assert(
      fc.property(fc.bigInt({ min: 0n, max: 2n ** 60n - 1n }), fc.nat(50), (value, offset) => {
        expect(format(60, value, undefined, offset)).toBe(
          `0x${value.toString(16).padStart(15, '0')}`,
        );
      }),
      { seed: 5, numRuns: 100 },
    );
  });
});
