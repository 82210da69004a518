import {
  type Departure,
  departureText,
  type ResponseChecker,
} from '../../../runtime/node/index.js';
import type { Mismatch } from '../runSummary.js';
import type { Findings, Outlet, OutletBlock, RunEnd, Stop } from './outlet.js';

/** Departures told one by one; further ones are counted. */
const MOST_TOLD = 50;

/** Why a run ends that is not as expected. */
export const DEPARTS = 'departs from the expectation';

/** What happens at a departure. */
export interface DepartureOptions {
  /** Goes on after a departure, and counts them all. */
  readonly all?: boolean;
  /** Told each departure that counts, at most fifty. */
  readonly onDeparture?: (text: string) => void;
}

/** What a comparison keeps to go on later. */
export interface SavedComparison {
  /** Cycles compared. */
  readonly cycle: number;
  readonly count: number;
  readonly first: Departure | null;
}

/** Compares the response with what is expected; unless all are wanted, a departure ends the run. */
export class Comparison implements Outlet {
  readonly wantsResponse = true;
  readonly #checker: ResponseChecker;
  readonly #options: DepartureOptions;
  #first: Departure | undefined;
  #count = 0;
  #cycle = 0;

  constructor(checker: ResponseChecker, options: DepartureOptions) {
    this.#checker = checker;
    this.#options = options;
  }

  /** One that goes on from what was saved, if anything. */
  static async of(
    checker: ResponseChecker,
    options: DepartureOptions,
    saved: SavedComparison | undefined,
  ): Promise<Comparison> {
    const comparison = new Comparison(checker, options);
    if (saved === undefined) return comparison;
    await checker.skipTo?.(saved.cycle);
    comparison.#cycle = saved.cycle;
    comparison.#count = saved.count;
    comparison.#first = saved.first ?? undefined;
    return comparison;
  }

  get save(): (() => SavedComparison) | undefined {
    if (this.#checker.skipTo === undefined) return undefined;
    return () => ({ cycle: this.#cycle, count: this.#count, first: this.#first ?? null });
  }

  async take(block: OutletBlock): Promise<Stop | undefined> {
    const most = this.#options.all ? Number.POSITIVE_INFINITY : 1;
    const checked = this.#checker.check(block, most);
    const found = checked instanceof Promise ? await checked : checked;
    this.#cycle = block.firstCycle + block.cycles;
    const [first] = found;
    if (first === undefined) return undefined;
    this.#first ??= first;
    if (!this.#options.all) return { lastCycle: first.cycle, reason: DEPARTS };
    for (const departure of found) {
      if (this.#count++ < MOST_TOLD) this.#options.onDeparture?.(departureText(departure));
    }
    return undefined;
  }

  async finish({ cycles, stopped }: RunEnd): Promise<Findings> {
    const unreached = await this.#checker.finish();
    const rest = `the expectation goes on at cycle ${unreached}, which was not run`;
    return {
      ...this.#verdict(cycles),
      notes: unreached === undefined || stopped !== undefined ? [] : [rest],
    };
  }

  discard(): void {
    // What goes wrong when a file is closed that was only read is of no interest.
    void Promise.resolve(this.#checker.close()).catch(() => undefined);
  }

  #verdict(cycles: number): Findings {
    const { all, onDeparture } = this.#options;
    // Another outlet may have ended the run before the departure that this one found.
    const first = this.#first !== undefined && this.#first.cycle < cycles ? this.#first : undefined;
    if (first !== undefined && !all) onDeparture?.(departureText(first));
    return {
      ...(first && { mismatch: mismatchOf(first) }),
      ...(all && { mismatches: this.#count }),
    };
  }
}

const mismatchOf = ({ place, ...mismatch }: Departure): Mismatch => mismatch;
