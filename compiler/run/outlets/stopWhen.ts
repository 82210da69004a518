import { counted, figure } from '../../report/figures.js';
import { DEPARTS } from './comparison.js';
import type {
  Findings,
  Outlet,
  OutletBlock,
  OutletPlan,
  RunEnd,
  Stop,
  WatchedPlace,
} from './outlet.js';

/** Most conditions that one run looks at. */
export const MOST_CONDITIONS = 32;

/** A condition that may end a run. */
export interface StopCondition {
  /** As the user wrote it. */
  readonly text: string;
  /** A net that is 1 where it holds, see `addConditions`. */
  readonly net: number;
}

/** When conditions end a run. */
export interface StopOptions {
  /** The occurrence of a condition that ends the run, from 1 on. */
  readonly after: number;
  /** A cycle up to which occurrences are passed over and not counted. */
  readonly past?: number;
  /** How to look at what is around a cycle. */
  readonly lookAround?: (cycle: number) => string;
}

/**
 * Ends a run in the cycle in which one of some conditions occurs for the `after`-th time: it holds
 * when the outputs of the cycle are sampled, and did not hold in the cycle before. That cycle is the
 * last one that counts. x is not 1.
 *
 * Throws RangeError for more than `MOST_CONDITIONS`.
 */
export function stopWhen(conditions: readonly StopCondition[], options: StopOptions): OutletPlan {
  if (conditions.length > MOST_CONDITIONS) {
    throw new RangeError(`at most ${MOST_CONDITIONS} conditions, got ${conditions.length}`);
  }
  return {
    flags: conditions.map(({ net }) => net),
    open: ({ watched, saved }) =>
      new StopOutlet(conditions, options, watched, saved as SavedStops | undefined),
  };
}

/** Where the conditions stand between two cycles. */
interface SavedStops {
  /** Those that hold, a bit each. */
  readonly holding: number;
  /** How often each has occurred. */
  readonly counts: readonly number[];
  /** See `StopOptions`. */
  readonly past?: number;
}

class StopOutlet implements Outlet {
  readonly wantsResponse = true;
  readonly #conditions: readonly StopCondition[];
  readonly #options: StopOptions;
  readonly #place: WatchedPlace;
  readonly #mask: number;
  readonly #counts: number[];
  readonly #past: number;
  #holding: number;

  constructor(
    conditions: readonly StopCondition[],
    options: StopOptions,
    place: WatchedPlace,
    saved: SavedStops | undefined,
  ) {
    this.#conditions = conditions;
    this.#options = options;
    this.#place = place;
    // What pads the word is none of the conditions.
    this.#mask = conditions.length === 32 ? -1 : (1 << conditions.length) - 1;
    const none = conditions.map(() => 0);
    // What was counted before a stop is over.
    this.#counts = options.past === undefined ? [...(saved?.counts ?? none)] : none;
    this.#past = options.past ?? saved?.past ?? -1;
    this.#holding = saved?.holding ?? 0;
  }

  save(): SavedStops {
    return { holding: this.#holding, counts: [...this.#counts], past: this.#past };
  }

  take({ firstCycle, cycles, watched }: OutletBlock): Stop | undefined {
    const { flagWord, flagBit, stride } = this.#place;
    const mask = this.#mask;
    let holding = this.#holding;
    for (let row = 0, at = flagWord; row < cycles; row++, at += stride) {
      const now = (watched[at]! >>> flagBit) & mask;
      if (now === holding) continue;
      const begun = now & ~holding;
      holding = now;
      if (begun === 0 || firstCycle + row <= this.#past) continue;
      const met = this.#count(begun);
      if (met < 0) continue;
      this.#holding = holding;
      return this.#stopAt(firstCycle + row, met);
    }
    this.#holding = holding;
    return undefined;
  }

  finish({ cycles, stopped }: RunEnd): Findings {
    if (stopped?.condition !== undefined) {
      const { lookAround } = this.#options;
      return lookAround ? { notes: [`look around with: ${lookAround(stopped.cycle)}`] } : {};
    }
    // What has been counted ends with a block, and a departure stands anywhere in one.
    if (stopped?.reason === DEPARTS) return {};
    const past = this.#past < 0 ? '' : `after cycle ${figure(this.#past)}, `;
    const told = this.#conditions.map(({ text }, i) => `${text} ${this.#times(i)}`);
    return { notes: told.map((text) => `${text} ${past}in ${counted(cycles, 'cycle')}`) };
  }

  discard(): void {
    // It holds nothing but counts.
  }

  /** Counts occurrences, a bit each; returns the first condition that has had enough, or -1. */
  #count(begun: number): number {
    let met = -1;
    for (let rest = begun; rest !== 0; rest &= rest - 1) {
      const condition = 31 - Math.clz32(rest & -rest);
      if (++this.#counts[condition]! >= this.#options.after && met < 0) met = condition;
    }
    return met;
  }

  #times(condition: number): string {
    const times = this.#counts[condition]!;
    if (times > 0) return times === 1 ? 'occurred once' : `occurred ${figure(times)} times`;
    // Before a stop that is passed over it has, or another one.
    return this.#past < 0 ? 'never held' : 'did not occur';
  }

  #stopAt(cycle: number, met: number): Stop {
    const { text } = this.#conditions[met]!;
    const { after } = this.#options;
    const reason = after === 1 ? `${text} holds` : `occurrence ${figure(after)} of ${text}`;
    return { lastCycle: cycle, reason, condition: text };
  }
}
