/** Where numbers of cycles stand from left (0) to right (1), and which of them are written there. */
export interface CycleScale {
  readonly isLogarithmic: boolean;
  readonly at: (cycles: number) => number;
  readonly ticks: readonly number[];
}

/** More cycles than these stand on a logarithmic scale, so that the first ones can be told apart. */
const MOST_LINEAR = 64;
const MOST_TICKS = 10;

/** A scale from 0 to `last` cycles, at least 1. */
export function cycleScale(last: number): CycleScale {
  if (last <= MOST_LINEAR) {
    const step = niceStep(last, MOST_TICKS);
    const ticks = Array.from({ length: Math.floor(last / step) + 1 }, (_, i) => i * step);
    return { isLogarithmic: false, at: (cycles) => cycles / last, ticks };
  }
  const at = (cycles: number): number => Math.log1p(cycles) / Math.log1p(last);
  return { isLogarithmic: true, at, ticks: [0, ...decades(last)] };
}

// As many a decade as there is room for.
function decades(last: number): number[] {
  const each = last <= 500 ? [1, 2, 5] : last <= 50_000 ? [1, 3] : [1];
  const ticks: number[] = [];
  for (let power = 1; power <= last; power *= 10) {
    for (const step of each) if (step * power <= last) ticks.push(step * power);
  }
  return ticks;
}

/** Whole numbers from 0 up to the first that is not below `most`, in four steps or so. */
export function countTicks(most: number): number[] {
  const step = niceStep(most, 5);
  return Array.from({ length: Math.ceil(most / step) + 1 }, (_, i) => i * step);
}

/** The least of 1, 2, 5, 10, 20, … of which at most `parts` make up `range`. */
function niceStep(range: number, parts: number): number {
  for (let power = 1; ; power *= 10) {
    for (const step of [1, 2, 5]) if (range <= step * power * parts) return step * power;
  }
}
