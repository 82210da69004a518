import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { folded, unfolded } from '../../../runtime/model/tables.js';

describe('folded values', () => {
  it('come back whole from JSON', () => {
    const bytes = fc.uint8Array({ maxLength: 20 }).map((array) => Uint8Array.from(array));
    const leaf = fc.oneof(fc.integer(), fc.string(), fc.boolean(), bytes);
    const row = fc.record({ role: fc.string(), index: fc.nat(), more: leaf });
    const value = fc.record({
      rows: fc.array(row, { maxLength: 9 }),
      list: fc.array(leaf, { maxLength: 9 }),
      mixed: fc.array(fc.oneof(row, fc.record({ role: fc.string() }))),
      leaf,
    });
    fc.assert(
      fc.property(value, (given) => {
        expect(unfolded(JSON.parse(JSON.stringify(folded(given))))).toEqual(given);
      }),
      { seed: 11, numRuns: 200 },
    );
  });

  it('take little room where rows are alike', () => {
    const rows = Array.from({ length: 100 }, (_, index) => ({ role: 'value', index }));
    expect(JSON.stringify(folded(rows)).length).toBeLessThan(JSON.stringify(rows).length / 2);
  });
});
