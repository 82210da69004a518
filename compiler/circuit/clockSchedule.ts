import type { ClockPorts } from './clockPorts.js';

/** When a clock ticks: its active edge comes at tick offset, offset + period, and so on. */
export interface ClockTiming {
  /** Name of the clock port. */
  readonly port: string;
  /** Whole ticks, at least 2. The clock is active for the first half of them, rounded down. */
  readonly period: number;
  /** Ticks, less than the period. */
  readonly offset: number;
}

/** What happens next in a cycle: outputs are sampled, or clocks change their levels. */
export type ClockStep =
  | { readonly kind: 'sample' }
  /** For each clock of `ClockPorts.ports`, whether it is active from now on. */
  | { readonly kind: 'levels'; readonly active: readonly boolean[] };

/** One kind of cycle: the levels that it starts with and its steps in order. */
export interface CycleShape {
  readonly start: readonly boolean[];
  readonly steps: readonly ClockStep[];
}

/**
 * The repeating pattern of clock edges.
 *
 * A cycle is one period of the base clock, from a multiple of its period on. The inputs of the
 * cycle's row are applied at its first tick; the outputs are sampled just before the base clock's
 * active edge.
 */
export interface ClockSchedule {
  /** The different cycles there are. */
  readonly shapes: readonly CycleShape[];
  /** Which of them each cycle of the pattern is; after the last comes the first again. */
  readonly pattern: Uint8Array;
  /** When each clock of `ClockPorts.ports` ticks; absent where all tick together. */
  readonly timings?: readonly ClockTiming[];
  /** The timing of the base clock, likewise. */
  readonly base?: ClockTiming;
}

/** Cycles in a pattern, and different ones among them, beyond which a schedule is refused. */
const LONGEST_PATTERN = 65536;
const MOST_SHAPES = 64;

/** All clocks tick together: sample, active edge, return. */
export function togetherSchedule(clocks: ClockPorts): ClockSchedule {
  const all = (active: boolean): boolean[] => clocks.ports.map(() => active);
  const steps: ClockStep[] = [
    { kind: 'sample' },
    { kind: 'levels', active: all(true) },
    { kind: 'levels', active: all(false) },
  ];
  return { shapes: [{ start: all(false), steps }], pattern: Uint8Array.of(0) };
}

/**
 * The schedule of clocks that tick each at its own pace. The first timing is the base clock's.
 *
 * Levels before the first tick are those of the periodic continuation. Throws RangeError for a
 * clock without timing, a timing without clock, bad numbers, and a pattern that is too long.
 */
export function timedSchedule(clocks: ClockPorts, timings: readonly ClockTiming[]): ClockSchedule {
  const byClock = clocks.ports.map(({ name }) => timingOf(name, timings));
  const base = timings[0]!;
  const ticks = byClock.reduce(
    (multiple, { period }) => leastMultiple(multiple, period),
    base.period,
  );
  const cycles = ticks / base.period;
  if (cycles > LONGEST_PATTERN) {
    throw new RangeError(
      `the clocks' pattern repeats after ${cycles} cycles; at most 65536 can be run`,
    );
  }
  const shapes = new Map<string, { index: number; shape: CycleShape }>();
  const pattern = new Uint8Array(cycles);
  for (let cycle = 0; cycle < cycles; cycle++) {
    const shape = shapeOf(byClock, base, cycle * base.period);
    const key = JSON.stringify(shape);
    const known = shapes.get(key) ?? { index: shapes.size, shape };
    shapes.set(key, known);
    if (known.index >= MOST_SHAPES) {
      throw new RangeError(`the clocks meet in more than ${MOST_SHAPES} different ways`);
    }
    pattern[cycle] = known.index;
  }
  return {
    shapes: [...shapes.values()].map(({ shape }) => shape),
    pattern,
    timings: byClock,
    base,
  };
}

function timingOf(name: string, timings: readonly ClockTiming[]): ClockTiming {
  const found = timings.filter(({ port }) => port === name);
  const timing = found[0];
  if (timing === undefined)
    throw new RangeError(`clock ${name} has no timing; give each clock one`);
  if (found.length > 1) throw new RangeError(`clock ${name} has ${found.length} timings`);
  const { period, offset } = timing;
  if (!Number.isSafeInteger(period) || period < 2 || period > 1e6) {
    throw new RangeError(`the period of ${name} must be 2 to 1000000 ticks, got ${period}`);
  }
  if (!Number.isSafeInteger(offset) || offset < 0 || offset >= period) {
    throw new RangeError(`the offset of ${name} must be 0 to ${period - 1} ticks, got ${offset}`);
  }
  return timing;
}

function shapeOf(clocks: readonly ClockTiming[], base: ClockTiming, first: number): CycleShape {
  const levels = (tick: number): boolean[] => clocks.map((clock) => isActive(clock, tick));
  const start = levels(first - 1);
  const steps: ClockStep[] = [];
  let before = start;
  for (const tick of edgesIn(clocks, first, base.period)) {
    if (tick - first === base.offset) steps.push({ kind: 'sample' });
    const active = levels(tick);
    if (active.some((level, clock) => level !== before[clock]))
      steps.push({ kind: 'levels', active });
    before = active;
  }
  return { start, steps };
}

// The ticks of a cycle at which some clock has an edge, in order.
function edgesIn(clocks: readonly ClockTiming[], first: number, length: number): number[] {
  const ticks = new Set<number>();
  for (const { period, offset } of clocks) {
    const half = Math.floor(period / 2);
    for (const edge of [offset, offset + half]) {
      const behind = (((first - edge) % period) + period) % period;
      for (let tick = behind === 0 ? 0 : period - behind; tick < length; tick += period) {
        ticks.add(first + tick);
      }
    }
  }
  return [...ticks].sort((p, q) => p - q);
}

function isActive({ period, offset }: ClockTiming, tick: number): boolean {
  const phase = (((tick - offset) % period) + period) % period;
  return phase < Math.floor(period / 2);
}

function leastMultiple(a: number, b: number): number {
  let [x, y] = [a, b];
  while (y !== 0) [x, y] = [y, x % y];
  return (a / x) * b;
}
