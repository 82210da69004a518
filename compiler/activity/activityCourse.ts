import type { ActivityCounter } from './activityCounter.js';

/** Ranges of cycles that are kept apart, at most. */
export const MOST_RANGES = 256;

/** Some values of a counter, with how many nets show each of them. */
export interface ValueGroup {
  readonly values: Uint32Array;
  readonly nets: Uint32Array;
}

/** What a course keeps to go on later. */
export interface SavedCourse {
  readonly width: number;
  /** Toggles of each group in each range, range by range, and up to the last one. */
  readonly ranges: readonly (readonly number[])[];
  readonly before: readonly number[];
}

/**
 * How much groups of values change in ranges of cycles. All ranges are equally long but for the
 * last one; their length doubles whenever there would be too many.
 */
export class ActivityCourse {
  /** Cycles of a range. */
  width = 1;
  /** Toggles of each group in each range. */
  readonly ranges: Float64Array[] = [];
  readonly #groups: readonly ValueGroup[];
  /** Toggles of each group up to the last range. */
  #before: Float64Array;

  constructor(groups: readonly ValueGroup[], saved?: SavedCourse) {
    this.#groups = groups;
    this.#before = new Float64Array(groups.length);
    if (saved === undefined) return;
    this.width = saved.width;
    this.ranges = saved.ranges.map((range) => Float64Array.from(range));
    this.#before = Float64Array.from(saved.before);
  }

  /** Cycles to the end of the range, when so many have been counted. */
  left(cycles: number): number {
    return this.width - (cycles % this.width);
  }

  /** Ends a range with what a counter has counted by now. */
  end(counter: ActivityCounter): void {
    const now = this.#totals(counter);
    this.ranges.push(now.map((count, group) => count - this.#before[group]!));
    this.#before = now;
    // A last range that is shorter than the others stays alone.
    if (this.ranges.length === MOST_RANGES && this.left(counter.cycles) === this.width) {
      this.#halve();
    }
  }

  save(): SavedCourse {
    return {
      width: this.width,
      ranges: this.ranges.map((range) => Array.from(range)),
      before: Array.from(this.#before),
    };
  }

  #totals(counter: ActivityCounter): Float64Array {
    return Float64Array.from(this.#groups, ({ values, nets }) =>
      values.reduce((sum, value, i) => sum + nets[i]! * counter.changes(value), 0),
    );
  }

  #halve(): void {
    const pairs = this.ranges.length / 2;
    for (let i = 0; i < pairs; i++) {
      const [one, other] = [this.ranges[2 * i]!, this.ranges[2 * i + 1]!];
      this.ranges[i] = one.map((count, group) => count + other[group]!);
    }
    this.ranges.length = pairs;
    this.width *= 2;
  }
}
