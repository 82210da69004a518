import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { StateWords } from '../../../runtime/table/stateWords.js';

const SEED = 20260806;
const ADDRESS = 64;

describe('StateWords', () => {
  it('packs bit 0 of the bytes that hold state, and gives the bits back', () => {
    const role = fc.constantFrom('value', 'unused');
    const state = fc.array(fc.tuple(role, fc.nat(255)), { maxLength: 100 });
    fc.assert(
      fc.property(state, fc.uint8Array({ minLength: 32, maxLength: 32 }), (bits, behind) => {
        const words = new StateWords({
          states: bits.map(([role], index) => ({ role, index })),
          stateInverted: new Uint8Array(bits.length),
        });
        const memory = new Uint8Array(ADDRESS + 160);
        memory.set(
          bits.map(([, byte]) => byte),
          ADDRESS,
        );
        // What stands behind the state does not count.
        memory.set(behind, ADDRESS + bits.length);
        const packed = new Uint32Array(words.width);
        words.pack(new Uint32Array(memory.buffer), ADDRESS, packed);
        const expected = bits.map(([role, byte]) => (role === 'unused' ? 0 : byte & 1));
        const bit = (i: number): number => (packed[i >>> 5]! >>> (i & 31)) & 1;
        expect(expected.map((_, i) => bit(i))).toEqual(expected);
        for (let i = bits.length; i < 32 * words.width; i++) expect(bit(i)).toBe(0);

        const copy = new Uint8Array(ADDRESS + 160).fill(7);
        words.unpack(packed, copy, ADDRESS);
        expect(Array.from(copy.subarray(ADDRESS, ADDRESS + bits.length))).toEqual(expected);
        expect(copy[ADDRESS + bits.length]).toBe(7);
      }),
      { seed: SEED, numRuns: 200 },
    );
  });
});
