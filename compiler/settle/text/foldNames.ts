/** A name of bits of one vector, or of one thing that is no bit of a vector. */
export interface FoldedName<T> {
  /** `q[7:0]`, `q[3]` or `q`. */
  readonly name: string;
  /** What stands behind the bits, leftmost first. */
  readonly items: readonly T[];
}

interface Bit<T> {
  readonly index: number;
  readonly item: T;
}

// Next to no bit of a vector, so that `q` is never taken for `q[-1]`.
const NO_INDEX = -2;

/**
 * Takes the bits of each vector together, as far as their indices follow each other: `q[7]` …
 * `q[0]` become `q[7:0]`. Vectors stay in the order of their first bits.
 */
export function foldNames<T extends { readonly name: string }>(
  items: readonly T[],
): FoldedName<T>[] {
  const vectors = new Map<string, Bit<T>[]>();
  for (const item of items) {
    const [, base, index] = /^(.+)\[(\d+)\]$/.exec(item.name) ?? [];
    const key = base ?? item.name;
    const bits = vectors.get(key) ?? [];
    vectors.set(key, bits);
    bits.push({ index: base === undefined ? NO_INDEX : Number(index), item });
  }
  return [...vectors].flatMap(([base, bits]) => runsOf(bits).map((run) => folded(base, run)));
}

function runsOf<T>(bits: Bit<T>[]): Bit<T>[][] {
  const runs: Bit<T>[][] = [];
  for (const bit of bits.sort((p, q) => q.index - p.index)) {
    const run = runs.at(-1);
    if (run?.at(-1)?.index === bit.index + 1) run?.push(bit);
    else runs.push([bit]);
  }
  return runs;
}

function folded<T>(base: string, run: readonly Bit<T>[]): FoldedName<T> {
  const left = run[0]!.index;
  const right = run.at(-1)!.index;
  const range = left === NO_INDEX ? '' : left === right ? `[${left}]` : `[${left}:${right}]`;
  return { name: base + range, items: run.map(({ item }) => item) };
}
