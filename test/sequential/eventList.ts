import type { ClockTiming } from '../../compiler/circuit/clockSchedule.js';

/** What a hand-made model of a circuit with clocks of its own does at each event. */
export interface EventModel<Row> {
  /** The inputs of a row are there; all clocks are at the levels they had. */
  inputs(row: Row, high: Levels): void;
  /** Clocks have moved, all at one moment. */
  clocks(rose: Moved, fell: Moved, high: Levels): void;
  /** The outputs, just before the base clock rises. */
  sample(): string;
}

type Levels = (port: string) => boolean;
type Moved = (port: string) => boolean;

/**
 * Calls a model tick by tick, for clocks that rest low: the inputs of row k at the start of the
 * k-th period of the first clock, then what is sampled, then the clocks that move at that tick.
 * Returns what was sampled, a text a row.
 */
export function eventList<Row>(
  timings: readonly ClockTiming[],
  rows: readonly Row[],
  model: EventModel<Row>,
): string[] {
  const base = timings[0]!;
  const isHigh = (tick: number, { period, offset }: ClockTiming): boolean =>
    (tick - offset + 2 * period) % period < Math.floor(period / 2);
  const at =
    (tick: number): Levels =>
    (port) =>
      isHigh(tick, timings.find((timing) => timing.port === port)!);
  const sampled: string[] = [];
  for (let tick = 0; tick < rows.length * base.period; tick++) {
    const [before, after] = [at(tick - 1), at(tick)];
    if (tick % base.period === 0) model.inputs(rows[tick / base.period]!, before);
    if (tick % base.period === base.offset) sampled.push(model.sample());
    if (timings.every(({ port }) => before(port) === after(port))) continue;
    model.clocks(
      (port) => !before(port) && after(port),
      (port) => before(port) && !after(port),
      after,
    );
  }
  return sampled;
}
