import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Continuation, type Moving, Repetition } from '../../compiler/settle/repetition.js';

/** A state that is the number of a place; `next` has one map of places for each cycle in turn. */
class Walk implements Moving<number> {
  place = 0;
  cycles = 0;
  readonly #next: readonly (readonly number[])[];

  constructor(next: readonly (readonly number[])[]) {
    this.#next = next;
  }

  snapshot = (): number => this.place;
  isAt = (snapshot: number): boolean => this.place === snapshot;

  run(): void {
    this.place = this.#next[this.cycles % this.#next.length]![this.place]!;
    this.cycles++;
  }
}

/** Looks at a walk, free from `freeAfter` on, until something is found or for `most` cycles. */
function foundOn(walk: Walk, freeAfter: number, most = 1000): Continuation | undefined {
  const repetition = new Repetition<number>(1);
  repetition.look(0, walk, freeAfter === 0);
  while (repetition.found === undefined && walk.cycles < most) {
    walk.run();
    repetition.look(walk.cycles, walk, walk.cycles >= freeAfter);
  }
  return repetition.found;
}

const maps = (count: number) =>
  fc.integer({ min: 1, max: 12 }).chain((places) =>
    fc.array(fc.array(fc.nat(places - 1), { minLength: places, maxLength: places }), {
      minLength: count,
      maxLength: count,
    }),
  );

describe('a repetition', () => {
  it('is what the state does for ever, and is always found', () => {
    const cases = fc.integer({ min: 1, max: 4 }).chain((step) => maps(step));
    fc.assert(
      fc.property(cases, fc.nat(20), (next, freeAfter) => {
        const walk = new Walk(next);
        const repetition = new Repetition<number>(next.length);
        const places: number[] = [];
        for (let cycle = 0; cycle <= 300; cycle++) {
          places.push(walk.place);
          repetition.look(cycle, walk, cycle >= freeAfter);
          walk.run();
        }
        const { found } = repetition;
        expect(found).toBeDefined();
        const { after } = found!;
        const period = found!.kind === 'still' ? 1 : found!.period;
        const later = places.slice(after);
        later.forEach((place, i) => {
          if (i >= period) expect(place).toBe(later[i - period]);
        });
        if (found!.kind === 'still') {
          expect(after === 0 || places[after - 1] !== places[after]).toBe(true);
        } else {
          expect(new Set(later).size).toBeGreaterThan(1);
        }
      }),
      { seed: 71, numRuns: 300 },
    );
  });

  it('has the shortest period, and is seen before long', () => {
    // 0 1 2 3 4 5 6 7 5 6 7 …
    const found = foundOn(new Walk([[1, 2, 3, 4, 5, 6, 7, 5]]), 0, 20);
    expect(found).toEqual({ kind: 'repeats', after: expect.any(Number), period: 3 });
  });

  it('names the moment after which nothing moved, even if that came before the state was free', () => {
    expect(foundOn(new Walk([[1, 2, 2]]), 5)).toEqual({ kind: 'still', after: 2 });
  });

  it('is not taken from a time in which the state was not free', () => {
    expect(foundOn(new Walk([[0]]), 2000)).toBeUndefined();
  });
});
