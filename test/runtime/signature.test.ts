import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layRow } from '../../runtime/layout.js';
import { Signature } from '../../runtime/signature.js';

const outputsOf = (bits: number) =>
  layRow([{ name: 'y', width: bits, msb: bits - 1, lsb: 0, isVector: true }]);

/** Bit by bit over BigInt: shift in each bit from the top, subtract the polynomial on a carry. */
function plainCrc(bytes: readonly number[]): string {
  let crc = 0n;
  for (const byte of bytes) {
    for (let bit = 7; bit >= 0; bit--) {
      const carry = (crc >> 63n) ^ BigInt((byte >> bit) & 1);
      crc = (crc << 1n) & 0xffffffffffffffffn;
      if (carry) crc ^= 0x42f0e1eba9ea3693n;
    }
  }
  return crc.toString(16).padStart(16, '0');
}

const packedBytes = (bytes: readonly number[]): Uint32Array => {
  const words = new Uint32Array((bytes.length + 3) >> 2);
  bytes.forEach((byte, i) => {
    words[i >> 2]! |= byte << (8 * (i & 3));
  });
  return words;
};

const ascii = (text: string) => Array.from(text, (c) => c.charCodeAt(0));

describe('Signature', () => {
  it('has the check value of CRC-64/ECMA-182', () => {
    // Check value of "123456789" in G. Cook's "Catalogue of parametrised CRC algorithms".
    const signature = new Signature({ outputs: outputsOf(72), threeValued: false });
    signature.add(packedBytes(ascii('123456789')), 1);
    expect(signature.digits()).toBe('6c40df5f0b497347');
  });

  it('is the same for the bytes of one cycle and of nine', () => {
    const signature = new Signature({ outputs: outputsOf(8), threeValued: false });
    const rows = Uint32Array.from(ascii('123456789'));
    signature.add(rows.subarray(0, 4), 4);
    signature.add(rows.subarray(4), 5);
    expect(signature.digits()).toBe('6c40df5f0b497347');
  });

  it('agrees with a bitwise division for rows of any width', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 100 }),
        fc.array(fc.nat(255), { minLength: 13 * 4, maxLength: 13 * 4 }),
        fc.boolean(),
        (bits, noise, threeValued) => {
          const outputs = outputsOf(bits);
          const groups = threeValued ? 2 : 1;
          const bytes = (bits + 7) >> 3;
          const cycles = 2;
          const rows = new Uint32Array(cycles * groups * outputs.words);
          const stream: number[] = [];
          for (let group = 0; group < cycles * groups; group++) {
            const taken = noise.slice(group * 13, group * 13 + bytes);
            rows.set(packedBytes(taken), group * outputs.words);
            stream.push(...taken);
          }
          const signature = new Signature({ outputs, threeValued });
          signature.add(rows, cycles);
          expect(signature.digits()).toBe(plainCrc(stream));
        },
      ),
      { seed: 3, numRuns: 200 },
    );
  });

  it('is zero before anything and without outputs', () => {
    const signature = new Signature({ outputs: outputsOf(0), threeValued: false });
    signature.add(new Uint32Array(0), 1000);
    expect(signature.digits()).toBe('0000000000000000');
  });

  it('refuses an array without enough rows', () => {
    const signature = new Signature({ outputs: outputsOf(33), threeValued: true });
    expect(() => signature.add(new Uint32Array(7), 2)).toThrow('expected 8 words, got 7');
  });
});
