import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readValue, type Value, writeValue } from '../../../runtime/model/values.js';

const row = (threeValued: boolean) => ({
  words: new Uint32Array(16).fill(0x5a5a5a5a),
  at: 0,
  unknownAt: threeValued ? 8 : undefined,
});

const place = fc
  .record({ width: fc.integer({ min: 1, max: 130 }), offset: fc.integer({ min: 0, max: 100 }) })
  .map((found) => ({ name: 'p', ...found }));

const binary = (width: number, digits: readonly string[]) =>
  fc
    .array(fc.constantFrom(...digits), { minLength: width, maxLength: width })
    .map((d) => d.join(''));

describe('values of a row', () => {
  it('are read as they were written, and bits beside them stay', () => {
    const known = place.chain((found) =>
      fc.tuple(fc.constant(found), binary(found.width, ['0', '1']), fc.boolean()),
    );
    fc.assert(
      fc.property(known, ([found, digits, threeValued]) => {
        const target = row(threeValued);
        if (threeValued) target.words.fill(0, 8);
        const before = target.words.slice();
        const bits = BigInt(`0b${digits}`);
        const value: Value = found.width <= 32 ? Number(bits) : bits;
        writeValue(target, found, value);
        expect(readValue(target, found)).toBe(value);
        for (let bit = 0; bit < 256; bit++) {
          if (bit >= found.offset && bit < found.offset + found.width) continue;
          expect((target.words[bit >> 5]! ^ before[bit >> 5]!) & (1 << (bit & 31))).toBe(0);
        }
      }),
      { seed: 12, numRuns: 100 },
    );
  });

  it('with x are texts of all their bits', () => {
    const some = place.chain((found) =>
      fc.tuple(fc.constant(found), binary(found.width, ['0', '1', 'x'])),
    );
    fc.assert(
      fc.property(some, ([found, digits]) => {
        const target = row(true);
        writeValue(target, found, found.width === 1 ? digits : `0b${digits}`);
        const bits = digits.includes('x') ? undefined : BigInt(`0b${digits}`);
        const text = found.width === 1 ? digits : `0b${digits}`;
        const number = found.width <= 32 ? Number(bits) : bits;
        expect(readValue(target, found)).toBe(bits === undefined ? text : number);
      }),
      { seed: 13, numRuns: 100 },
    );
  });

  const bit = { name: 'go', width: 1, offset: 3 };
  const wide = { name: 'key', width: 40, offset: 3 };

  it.each([
    [bit, 2, RangeError, 'go takes 0 to 1, got number 2'],
    [bit, -1, RangeError, 'go takes 0 to 1, got number -1'],
    [bit, 0.5, RangeError, 'go takes 0 to 1, got number 0.5'],
    [bit, Number.NaN, RangeError, 'go takes 0 to 1, got number NaN'],
    [bit, true, TypeError, 'go takes a number (1 bit), got boolean true'],
    [bit, 1n, TypeError, 'go takes a number (1 bit), got bigint 1n'],
    [bit, undefined, TypeError, 'go takes a number (1 bit), got undefined'],
    [bit, 'x', TypeError, "go takes a number (1 bit), got 'x'"],
    [wide, 5, TypeError, 'key takes a bigint (40 bits), got number 5'],
    [wide, 1n << 40n, RangeError, 'key takes 0 to 2n ** 40n - 1n, got bigint 1099511627776n'],
    [wide, -1n, RangeError, 'key takes 0 to 2n ** 40n - 1n, got bigint -1n'],
  ])('of %o refuse %s', (target, value, kind, message) => {
    expect(() => writeValue(row(false), target, value)).toThrow(new kind(message));
  });

  it.each([
    [bit, 'z', "go takes 0, 1 or 'x', got 'z'"],
    [bit, '', "go takes 0, 1 or 'x', got ''"],
    [wide, '0b1', "key takes '0b' and 40 digits 0, 1 or x, got '0b1'"],
    [wide, 'x'.repeat(40), `key takes '0b' and 40 digits 0, 1 or x, got '${'x'.repeat(40)}'`],
  ])('of %o with x refuse %s', (target, value, message) => {
    expect(() => writeValue(row(true), target, value)).toThrow(new RangeError(message));
  });
});
