/** Neighbouring entries of a list of counts, taken together. */
export interface Bin {
  readonly from: number;
  readonly to: number;
  readonly count: number;
}

/**
 * Sums counts into bins of 1, 2, 5, 10, 20, … entries, so that there are `most` bins at most.
 *
 * Entries before `first` are left out. The last bin may be a smaller one.
 */
export function binned(counts: readonly number[], first: number, most: number): Bin[] {
  const size = binSize(counts.length - first, most);
  const bins: Bin[] = [];
  for (let from = first; from < counts.length; from += size) {
    let count = 0;
    for (let i = from; i < from + size; i++) count += counts[i] ?? 0;
    bins.push({ from, to: Math.min(from + size, counts.length) - 1, count });
  }
  return bins;
}

function binSize(entries: number, most: number): number {
  for (let power = 1; ; power *= 10) {
    for (const step of [1, 2, 5]) if (entries <= most * step * power) return step * power;
  }
}

/** `3`, or `1-5`. */
export function binLabel({ from, to }: Bin): string {
  return from === to ? `${from}` : `${from}-${to}`;
}
