import { describe, expect, it } from 'vitest';
import { engineNames } from '../../compiler/engines.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

// Start-stop frames "8N1" (common practice): the line rests at 1; a start bit 0, eight data bits
// from the least significant on, no parity, one stop bit 1, all equally long.
const levelsOf = (byte: number): number[] => [
  0,
  ...Array.from({ length: 8 }, (_, i) => (byte >> i) & 1),
  1,
];

const CYCLES_A_BIT = 16;
const FRAME = 10 * CYCLES_A_BIT;
const design = ownDesign('uart', { divider: CYCLES_A_BIT });
const bytes = [0x00, 0xff, 0x55, 0xaa, 0x01, 0x80, 0x43, 0x6c];

describe('the UART', () => {
  it('has the frame of a capital C, 0x43, as drawn by hand', () => {
    expect(levelsOf(0x43).join('')).toBe('0110000101');
  });

  it.each(engineNames)(
    'sends each bit of each byte at its level and length, on %s',
    async (name) => {
      const rows: PortValues[] = [{ reset: 1, rx: 1 }, { reset: 0 }];
      const taken = bytes.map((byte) => {
        // The inputs change while the frame goes out, which must not show.
        rows.push({ tx_data: byte, tx_valid: 1 }, { tx_data: ~byte & 0xff, tx_valid: 0 });
        rows.push(...new Array<PortValues>(FRAME + 5).fill({}));
        return rows.length - FRAME - 7;
      });
      const read = playValues(await poweredEngine(design, name), rows);
      const line = rows.map((_, cycle) => Number(read('tx', cycle)));
      const expected = new Array<number>(rows.length).fill(1);
      bytes.forEach((byte, i) => {
        expect(read('tx_ready', taken[i]!)).toBe(1n);
        levelsOf(byte).forEach((level, bit) => {
          const start = taken[i]! + 1 + bit * CYCLES_A_BIT;
          expected.fill(level, start, start + CYCLES_A_BIT);
        });
      });
      expect(line).toEqual(expected);
    },
  );

  it.each(engineNames)(
    'receives the bytes of frames, with and without pauses, on %s',
    async (name) => {
      const rows: PortValues[] = [{ reset: 1, rx: 1 }, { reset: 0 }];
      bytes.forEach((byte, i) => {
        for (const rx of levelsOf(byte)) {
          rows.push(...new Array<PortValues>(CYCLES_A_BIT).fill({ rx }));
        }
        rows.push(...new Array<PortValues>(i % 2 === 0 ? 0 : 7 * i).fill({}));
      });
      rows.push(...new Array<PortValues>(CYCLES_A_BIT).fill({}));
      const read = playValues(await poweredEngine(design, name), rows);
      const heard = rows.flatMap((_, cycle) =>
        read('rx_valid', cycle) === 1n ? [Number(read('rx_data', cycle))] : [],
      );
      expect(heard).toEqual(bytes);
      expect(rows.some((_, cycle) => read('rx_error', cycle) === 1n)).toBe(false);
    },
  );
});
