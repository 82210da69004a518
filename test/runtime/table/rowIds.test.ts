import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { RowIds } from '../../../runtime/table/rowIds.js';

const SEED = 20260805;

describe('RowIds', () => {
  it('numbers rows in the order in which they first come, as a map of their texts does', () => {
    const words = fc.constantFrom(0, 1, 2, 0x8000_0000, 0xffff_ffff);
    const rows = fc.integer({ min: 1, max: 4 }).chain((width) =>
      fc.record({
        width: fc.constant(width),
        rows: fc.array(fc.array(words, { minLength: width, maxLength: width }), { size: 'large' }),
      }),
    );
    fc.assert(
      fc.property(rows, ({ width, rows }) => {
        const ids = new RowIds(width);
        const known = new Map<string, number>();
        for (const row of rows) {
          const text = row.join();
          if (!known.has(text)) known.set(text, known.size);
          expect(ids.idOf(Uint32Array.from(row))).toBe(known.get(text));
        }
        expect(ids.count).toBe(known.size);
        for (const [text, id] of known) expect(ids.row(id).join()).toBe(text);
      }),
      { seed: SEED, numRuns: 60 },
    );
  });

  it('keeps many rows apart', () => {
    const ids = new RowIds(2);
    const rowOf = (n: number) => Uint32Array.of(n & 255, n >>> 8);
    for (let n = 0; n < 50_000; n++) ids.idOf(rowOf(n));
    expect(ids.count).toBe(50_000);
    for (let n = 0; n < 50_000; n += 997) expect(ids.idOf(rowOf(n))).toBe(n);
  });
});
