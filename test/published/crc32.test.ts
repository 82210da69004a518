import { describe, expect, it } from 'vitest';
import { engineNames } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

const design = ownDesign('crc32');

/** One row a bit, every byte least significant bit first, then a row to look at the result. */
function rowsOf(message: Uint8Array, first: PortValues = {}): PortValues[] {
  const rows = [...message].flatMap((byte) =>
    Array.from({ length: 8 }, (_, i) => ({ data: (byte >> i) & 1, enable: 1, restart: 0 })),
  );
  return [first, ...rows, { enable: 0 }];
}

/**
 * The CRC of IEEE 802.3 (2018), section 3.2.9, by the division that the section describes: the
 * first 32 bits complemented, the remainder complemented, its highest power sent first. `crc`
 * shows the bit sent first as its lowest.
 */
function remainderOf(message: Uint8Array): bigint {
  const bits = [...message].flatMap((byte) => Array.from({ length: 8 }, (_, i) => (byte >> i) & 1));
  const dividend = [...bits, ...new Array<number>(32).fill(0)];
  for (let i = 0; i < 32; i++) dividend[i]! ^= 1;
  // x^32 + x^26 + x^23 + x^22 + x^16 + x^12 + x^11 + x^10 + x^8 + x^7 + x^5 + x^4 + x^2 + x + 1
  const exponents = [32, 26, 23, 22, 16, 12, 11, 10, 8, 7, 5, 4, 2, 1, 0];
  for (let i = 0; i < bits.length; i++) {
    if (dividend[i] === 0) continue;
    for (const exponent of exponents) dividend[i + 32 - exponent]! ^= 1;
  }
  const sent = dividend.slice(bits.length).map((bit) => 1 - bit);
  return BigInt(`0b${sent.reverse().join('')}`);
}

describe('CRC-32', () => {
  // R. Williams, "A painless guide to CRC error detection algorithms", 1993, check value of CRC-32
  // (value from memory).
  it.each(engineNames)(
    'gives the check value cbf43926 of the message 123456789, on %s',
    async (name) => {
      const rows = rowsOf(Buffer.from('123456789'));
      const read = playValues(await poweredEngine(design, name), rows);
      expect(read('crc', rows.length - 1).toString(16)).toBe('cbf43926');
      expect(remainderOf(Buffer.from('123456789')).toString(16)).toBe('cbf43926');
    },
  );

  it('gives the remainder that IEEE 802.3 defines, for 300 random messages', async () => {
    const engine = await poweredEngine(design, 'wasm');
    const random = new RandomBits(802);
    for (let i = 0; i < 300; i++) {
      const message = Uint8Array.from({ length: 4 + (random.next() % 100) }, () => random.next());
      const rows = rowsOf(message, { restart: 1 });
      const read = playValues(engine, rows);
      expect(read('crc', rows.length - 1)).toBe(remainderOf(message));
    }
  });
});
