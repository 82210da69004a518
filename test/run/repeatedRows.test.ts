import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { allRows, repeatedRows } from '../../compiler/run/repeatedRows.js';
import { layRow } from '../../runtime/layout.js';
import { skipCycles, takeCycles } from '../../runtime/skipCycles.js';
import type { StimulusBlock } from '../../runtime/stream.js';

const row = layRow([{ name: 'a', width: 32, msb: 31, lsb: 0, isVector: true }]);

/** Blocks of one-word rows, some of them held. */
const stimuli: fc.Arbitrary<StimulusBlock[]> = fc.array(
  fc.oneof(
    fc
      .uint32Array({ minLength: 1, maxLength: 6 })
      .map((rows) => ({ cycles: rows.length, rows, stride: 1 })),
    fc
      .tuple(fc.integer({ min: 1, max: 9 }), fc.nat())
      .map(([cycles, value]) => ({ cycles, rows: Uint32Array.of(value), stride: 0 })),
  ),
  { minLength: 1, maxLength: 6 },
);

/** The rows of the first cycles, one by one. */
async function listed(
  stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  most = Number.POSITIVE_INFINITY,
): Promise<number[]> {
  const rows: number[] = [];
  for await (const block of stimulus) {
    for (let i = 0; i < block.cycles; i++) {
      rows.push(block.rows[i * block.stride]!);
      if (rows.length === most) return rows;
    }
  }
  return rows;
}

describe('a stimulus', () => {
  it('of which cycles are passed over or left out is what is left of it', () =>
    fc.assert(
      fc.asyncProperty(stimuli, fc.nat(30), fc.nat(30), async (blocks, from, count) => {
        const all = await listed(blocks);
        expect(await listed(skipCycles(blocks, from))).toEqual(all.slice(from));
        expect(await listed(takeCycles(skipCycles(blocks, from), count))).toEqual(
          all.slice(from, from + count),
        );
      }),
      { seed: 20260423 },
    ));

  it('that comes again has row c, modulo their number, in cycle c, from any cycle on', () =>
    fc.assert(
      fc.asyncProperty(stimuli, fc.nat(40), async (blocks, from) => {
        const all = await listed(blocks);
        const rows = await allRows(blocks, row, false);
        expect(Array.from(rows)).toEqual(all);
        expect(await listed(repeatedRows(rows, 1, from), 50)).toEqual(
          Array.from({ length: 50 }, (_, i) => all[(from + i) % all.length]),
        );
      }),
      { seed: 20260424 },
    ));

  it('is refused where it is too long to come again, or empty', async () => {
    const long = [{ cycles: 1e9, rows: Uint32Array.of(1), stride: 0 }];
    await expect(allRows(long, row, false)).rejects.toThrow('more than 64 MB');
    await expect(allRows([], row, false)).rejects.toThrow('no row that could come again');
  });
});
