import fc from 'fast-check';
import { RandomBits } from '../../../../runtime/random.js';

/** What may be written in several ways; what is off is always written in the plainest one. */
export const families = [
  /** White space, comments, attributes. */
  'trivia',
  /** Numbers in several bases, with and without size. */
  'numbers',
  /** Names with a backslash where none is needed. */
  'escapes',
  /** Statements, gates, instances, functions for one operation. */
  'forms',
  /** Expressions inside of others. */
  'nesting',
  /** Header of modules, declarations, parameters, connections. */
  'styles',
  /** Macros and conditional text. */
  'macros',
  /** Several files, included files, the order of modules and items. */
  'files',
] as const;
export type Family = (typeof families)[number];

/** How a design is spelled: which families vary, and a seed for how. */
export interface SpellingRecipe {
  readonly seed: number;
  readonly varies: readonly Family[];
}

/** Random spellings; they shrink towards the plainest one. */
export const spellingRecipe: fc.Arbitrary<SpellingRecipe> = fc.record({
  seed: fc.nat(1_000_000),
  varies: fc.subarray([...families], { minLength: 3 }),
});

/** The plainest spelling. */
export const plain: SpellingRecipe = { seed: 0, varies: [] };

/** The choices of one spelling. */
export class Choices {
  readonly #streams = new Map<Family, () => number>();

  constructor({ seed, varies }: SpellingRecipe) {
    for (const family of varies) {
      this.#streams.set(family, stream(BigInt(seed * families.length + families.indexOf(family))));
    }
  }

  /** A choice from 0 to `count - 1`, which is 0 where the family does not vary. */
  pick(family: Family, count: number): number {
    const next = this.#streams.get(family);
    return next === undefined ? 0 : next() % count;
  }

  /** One of several ways, the plainest first. */
  of<T>(family: Family, ways: readonly T[]): T {
    return ways[this.pick(family, ways.length)]!;
  }

  /** True once in so many times. */
  rarely(family: Family, times: number): boolean {
    return this.pick(family, times) === times - 1;
  }
}

function stream(seed: bigint): () => number {
  const random = new RandomBits(seed);
  return () => random.next() >>> 3;
}
