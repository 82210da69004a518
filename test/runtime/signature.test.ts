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
        fc.integer({ min: 1, max: 400 }),
        fc.array(fc.nat(255), { minLength: 50 * 4, maxLength: 50 * 4 }),
        fc.boolean(),
        (bits, noise, threeValued) => {
          const outputs = outputsOf(bits);
          const groups = threeValued ? 2 : 1;
          const bytes = (bits + 7) >> 3;
          const cycles = 2;
          const rows = new Uint32Array(cycles * groups * outputs.words);
          const stream: number[] = [];
          for (let group = 0; group < cycles * groups; group++) {
            const taken = noise.slice(group * 50, group * 50 + bytes);
            rows.set(packedBytes(taken), group * outputs.words);
            stream.push(...taken);
          }
          const signature = new Signature({ outputs, threeValued });
          signature.add(rows, cycles);
          expect(signature.digits()).toBe(plainCrc(stream));
        },
      ),
      { seed: 3, numRuns: 100 },
    );
  });

  it('takes more than its memory holds, in many rows and in one', () => {
    const words = 50_001;
    const rows = Uint32Array.from({ length: words }, (_, i) => Math.imul(i + 1, 0x9e3779b1));
    // 16 bits a row, and one row of an odd number of bytes.
    for (const bits of [16, 32 * words - 8]) {
      const outputs = outputsOf(bits);
      const cycles = Math.floor(words / outputs.words);
      const bytes = (bits + 7) >> 3;
      const padded = new Uint8Array(rows.buffer);
      const stream = Array.from({ length: cycles }, (_, k) =>
        Array.from(padded.subarray(4 * k * outputs.words, 4 * k * outputs.words + bytes)),
      ).flat();
      const whole = new Signature({ outputs, threeValued: false });
      whole.add(rows, cycles);
      expect(whole.digits()).toBe(plainCrc(stream));
    }
  });

  it('goes on from what was saved', () => {
    const rows = Uint32Array.from({ length: 21 }, (_, i) => 7 * i);
    const outputs = outputsOf(70);
    const [whole, first, second] = [1, 2, 3].map(
      () => new Signature({ outputs, threeValued: false }),
    ) as [Signature, Signature, Signature];
    whole.add(rows, 7);
    first.add(rows, 3);
    second.restore(first.save());
    second.add(rows.subarray(9), 4);
    expect(second.digits()).toBe(whole.digits());
    expect(() => second.restore(new Uint32Array(3))).toThrow('expected two words, got 3');
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
