/** The empty set. */
export const NO_ROOTS = 0;

/** Stands for every set that is too large to be told apart. */
export const MANY_ROOTS = 1;

const LARGEST = 8;

/**
 * Sets of up to eight clock ports, each distinct set once, as a number.
 *
 * Larger ones are all `MANY_ROOTS`, so that a net whose set grows port by port changes a few times
 * only, however many ports there are.
 */
export class RootSets {
  readonly #members: (readonly number[])[] = [[], []];
  readonly #known = new Map<string, number>();
  readonly #unions = new Map<number, number>();

  /** The set of one port. */
  single(port: number): number {
    return this.#intern([port]);
  }

  /** The ports of a set in ascending order; none are told of `MANY_ROOTS`. */
  members(set: number): readonly number[] {
    return this.#members[set]!;
  }

  union(a: number, b: number): number {
    if (a === b || b === NO_ROOTS) return a;
    if (a === NO_ROOTS) return b;
    if (a === MANY_ROOTS || b === MANY_ROOTS) return MANY_ROOTS;
    const key = Math.min(a, b) * 2 ** 26 + Math.max(a, b);
    let union = this.#unions.get(key);
    if (union === undefined) {
      const all = new Set([...this.members(a), ...this.members(b)]);
      union = all.size > LARGEST ? MANY_ROOTS : this.#intern([...all].sort((p, q) => p - q));
      this.#unions.set(key, union);
    }
    return union;
  }

  /** Whether every port of one set is in another. */
  isWithin(part: number, whole: number): boolean {
    return this.union(part, whole) === whole;
  }

  #intern(members: readonly number[]): number {
    const key = members.join();
    const known = this.#known.get(key) ?? this.#members.push(members) - 1;
    this.#known.set(key, known);
    return known;
  }
}
