import type { ClockPorts } from '../circuit/clockPorts.js';
import type { ClockSchedule, ClockTiming } from '../circuit/clockSchedule.js';

/** A clock that changes its level. */
export interface ClockMove {
  readonly time: number;
  /** Index into `ClockPorts.ports`. */
  readonly clock: number;
  readonly level: number;
}

/**
 * The clocks of a run on a time axis of whole units.
 *
 * Where all clocks tick together a cycle takes two units: sampled at its start, active in its
 * second half. Otherwise a tick takes two, outputs are sampled at the start of the tick at which
 * the base clock becomes active, and clocks move in the middle of a tick: what is sampled is never
 * on the edge.
 */
export class ClockLevels {
  readonly #ports: ClockPorts['ports'];
  readonly #timings: readonly ClockTiming[] | undefined;
  readonly #base: ClockTiming;

  constructor({ ports }: ClockPorts, { timings, base }: ClockSchedule) {
    this.#ports = ports;
    this.#timings = timings;
    this.#base = base ?? { port: '', period: 1, offset: 0 };
  }

  /** When the outputs of a cycle are sampled. */
  sampleTime(cycle: number): number {
    return 2 * (cycle * this.#base.period + this.#base.offset);
  }

  /** The level of a clock when the outputs of a cycle are sampled. */
  levelAt(cycle: number, clock: number): number {
    const { inactive } = this.#ports[clock]!;
    if (this.#timings === undefined) return inactive;
    const { period, offset } = this.#timings[clock]!;
    const tick = cycle * this.#base.period + this.#base.offset - 1;
    const phase = (((tick - offset) % period) + period) % period;
    return phase < Math.floor(period / 2) ? 1 - inactive : inactive;
  }

  /** How the clocks move after the sampling of a cycle and up to that of the next one, in order. */
  moves(cycle: number): ClockMove[] {
    const start = this.sampleTime(cycle);
    if (this.#timings === undefined) {
      return [1, 2].flatMap((after) =>
        this.#ports.map(({ inactive }, clock) => ({
          time: start + after,
          clock,
          level: after === 1 ? 1 - inactive : inactive,
        })),
      );
    }
    const firstTick = start / 2;
    const moves = this.#timings.flatMap(({ period, offset }, clock) => {
      const { inactive } = this.#ports[clock]!;
      const half = Math.floor(period / 2);
      return [
        ...this.#ticksOf(firstTick, period, offset).map((tick) => ({ tick, level: 1 - inactive })),
        ...this.#ticksOf(firstTick, period, offset + half).map((tick) => ({
          tick,
          level: inactive,
        })),
      ].map(({ tick, level }) => ({ time: 2 * tick + 1, clock, level }));
    });
    return moves.sort((a, b) => a.time - b.time);
  }

  // The ticks of one base period, from `first` on, that are `place` modulo `period`.
  #ticksOf(first: number, period: number, place: number): number[] {
    const behind = (((first - place) % period) + period) % period;
    const ticks: number[] = [];
    const end = first + this.#base.period;
    for (let tick = first + (behind === 0 ? 0 : period - behind); tick < end; tick += period) {
      ticks.push(tick);
    }
    return ticks;
  }
}
