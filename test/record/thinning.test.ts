import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Kept, surplus } from '../../compiler/record/thinning.js';

/** What is left when checkpoints come one after another, each list thinned when one is added. */
function keptOf(added: readonly Kept[], limits: { most: number; bytes: number }): Kept[] {
  let kept: Kept[] = [];
  for (const each of added) {
    const list = [...kept, each];
    const gone = new Set(surplus(list, limits));
    kept = list.filter((one) => !gone.has(one));
  }
  return kept;
}

const steady = (count: number): Kept[] =>
  Array.from({ length: count }, (_, i) => ({ cycle: 1000 * i, bytes: 1 }));

describe('the checkpoints that are kept', () => {
  it('are never more than the limit, with the first and the newest three among them', () => {
    fc.assert(
      fc.property(
        fc.array(fc.record({ step: fc.integer({ min: 1, max: 1e6 }), bytes: fc.nat(50) })),
        fc.integer({ min: 5, max: 20 }),
        (steps, most) => {
          let cycle = 0;
          const added = steps.map(({ step, bytes }) => {
            cycle += step;
            return { cycle, bytes };
          });
          const kept = keptOf(added, { most, bytes: 1e9 });
          expect(kept.length).toBeLessThanOrEqual(most);
          expect(kept.slice(0, 1)).toEqual(added.slice(0, 1));
          expect(kept.slice(-3)).toEqual(added.slice(-3));
        },
      ),
      { seed: 20260420 },
    );
  });

  it('are spread evenly: no gap is wider than a thirtieth of the run or so', () => {
    for (const count of [65, 100, 1000, 5000]) {
      const kept = keptOf(steady(count), { most: 64, bytes: 1e9 });
      const gaps = kept.slice(1).map(({ cycle }, i) => cycle - kept[i]!.cycle);
      expect(Math.max(...gaps)).toBeLessThanOrEqual((1000 * count) / 28);
    }
  });

  it('are fewer where they are large, but the newest stays', () => {
    const large = steady(50).map((each) => ({ ...each, bytes: 10 }));
    const kept = keptOf(large, { most: 64, bytes: 85 });
    expect(kept.length).toBe(8);
    expect(kept.at(-1)).toEqual(large.at(-1));
    const huge = steady(5).map((each) => ({ ...each, bytes: 1000 }));
    expect(keptOf(huge, { most: 64, bytes: 85 })).toEqual([huge.at(-1)]);
  });
});
