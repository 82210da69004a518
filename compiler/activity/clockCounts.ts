import type { Design } from '../compile.js';
import { ClockLevels } from '../waveform/clockLevels.js';

/** What a clock does in some cycles. */
export interface ClockCount {
  /** Changes of its level. */
  readonly changes: number;
  /** Units of time, as `ClockLevels` has them, in which it is 1. */
  readonly high: number;
}

/** What each clock of a design does from the sampling of cycle `first` on, for so many cycles. */
export function clockCounts(
  { clocks, schedule }: Pick<Design, 'clocks' | 'schedule'>,
  first: number,
  cycles: number,
): ClockCount[] {
  const levels = new ClockLevels(clocks, schedule);
  const pattern = schedule.pattern.length;
  const rest = cycles % pattern;
  const times = (cycles - rest) / pattern;
  return clocks.ports.map((_, clock) => {
    const whole = times === 0 ? NOTHING : counted(levels, clock, first, pattern);
    const part = counted(levels, clock, first, rest);
    return {
      changes: times * whole.changes + part.changes,
      high: times * whole.high + part.high,
    };
  });
}

const NOTHING: ClockCount = { changes: 0, high: 0 };

function counted(levels: ClockLevels, clock: number, first: number, cycles: number): ClockCount {
  let [changes, high] = [0, 0];
  let level = levels.levelAt(first, clock);
  let since = levels.sampleTime(first);
  const advance = (time: number, to: number): void => {
    high += level * (time - since);
    changes += level === to ? 0 : 1;
    [level, since] = [to, time];
  };
  for (let cycle = first; cycle < first + cycles; cycle++) {
    for (const move of levels.moves(cycle)) {
      if (move.clock === clock) advance(move.time, move.level);
    }
  }
  advance(levels.sampleTime(first + cycles), level);
  return { changes, high };
}
