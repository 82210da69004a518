import type { Engine, MarkingEngine, RunPoint } from '../../runtime/engine.js';
import type { StimulusBlock } from '../../runtime/stream.js';
import { counted } from '../report/figures.js';
import type {
  Findings,
  Outlet,
  OutletBlock,
  OutletContext,
  OutletPlan,
  RunEnd,
  Stop,
} from '../run/outlets/outlet.js';
import { HeldInputs } from './heldInputs.js';
import { leadIn, type Mark } from './leadIn.js';

/** How the states of a run come again. */
export interface Repetition {
  /** The first cycle whose state before it comes again. */
  readonly leadIn: number;
  /** Cycles after which it does. */
  readonly period: number;
}

/** Why a run ended that has come to a state for the second time. */
export const REPEATS = 'the state comes again';

/** How a `PeriodSearch` looks. */
export interface PeriodSearchOptions {
  /**
   * The packed rows of a stimulus that comes again and again from cycle 0 on. Without them the last
   * row of the stimulus is held, see `over`.
   */
  readonly rows?: Uint32Array;
  /** Ends the search for the lead-in. */
  readonly interrupt?: AbortSignal;
}

/**
 * Looks for the first state that comes again while the inputs are held or come again themselves.
 *
 * The state is compared with one marked at a moment that moves on by powers of two: R. P. Brent, "An
 * improved Monte Carlo factorization algorithm", BIT 20, 1980. A state found again is exactly the
 * same one, memories included. The run ends where it is found; then the lead-in is looked for.
 */
export class PeriodSearch {
  readonly plan: OutletPlan = {
    marks: true,
    open: (context) => new SearchOutlet(this, context),
  };
  readonly options: PeriodSearchOptions;
  /** Told when the stimulus is over. */
  onHeld: (() => void) | undefined;

  constructor(options: PeriodSearchOptions = {}) {
    this.options = options;
  }

  /** A stimulus of which the last row is held, by which the search learns when it is over. */
  async *over(
    stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  ): AsyncGenerator<StimulusBlock, void, undefined> {
    yield* stimulus;
    this.onHeld?.();
  }
}

/** Marks of a search, as they are kept to go on: the first one and the last. */
interface SavedSearch {
  readonly marks: readonly SavedMark[];
}

interface SavedMark extends Omit<Mark, 'point'> {
  readonly point: Omit<RunPoint, 'before'> & { readonly before: Uint32Array | null };
}

class SearchOutlet implements Outlet {
  readonly wantsResponse = false;
  readonly #options: PeriodSearchOptions;
  readonly #engine: MarkingEngine;
  readonly #patternLength: number;
  readonly #marks: Mark[];
  #inputs: HeldInputs | undefined;
  #cycle = 0;
  #period: number | undefined;

  constructor(search: PeriodSearch, { engine, design, saved }: OutletContext) {
    this.#options = search.options;
    this.#engine = engine as MarkingEngine;
    this.#patternLength = design.schedule.pattern.length;
    const { cycle = 0, marks = [] } =
      (saved as (SavedSearch & { cycle: number }) | undefined) ?? {};
    this.#cycle = cycle;
    this.#marks = marks.map(({ point, ...mark }) => ({
      ...mark,
      point: { ...point, before: point.before ?? undefined },
    }));
    search.onHeld = () => this.#start();
  }

  take({ firstCycle, cycles }: OutletBlock): Stop | undefined {
    this.#cycle = firstCycle + cycles;
    // The first row has none before it, so that no later state can be the one before it.
    if (this.#inputs === undefined && this.#options.rows !== undefined) this.#start();
    const mark = this.#marks.at(-1);
    if (this.#inputs === undefined || mark === undefined) return undefined;
    const after = this.#engine.repeatedAfter;
    if (after !== undefined) {
      this.#period = after;
      return { lastCycle: mark.cycle + after - 1, reason: REPEATS };
    }
    this.#marks[this.#marks.length - 1] = { ...mark, until: this.#cycle };
    if (this.#cycle - mark.cycle >= mark.cycle - this.#marks[0]!.cycle) this.#mark();
    return undefined;
  }

  save(): SavedSearch & { readonly cycle: number } {
    const [first] = this.#marks;
    const last = this.#marks.at(-1);
    const kept = first === undefined ? [] : first === last ? [first] : [first, last!];
    const marks = kept.map(({ point, ...mark }) => ({
      ...mark,
      point: { ...point, before: point.before ?? null },
    }));
    return { cycle: this.#cycle, marks };
  }

  async finish({ cycles }: RunEnd): Promise<Findings> {
    const [first] = this.#marks;
    if (first === undefined) {
      return { notes: ['the run ended before its inputs were held: no period was looked for'] };
    }
    if (this.#period === undefined) {
      const looked = counted(cycles - first.cycle, 'cycle');
      return { notes: [`no state came again in ${looked} with the inputs held`] };
    }
    const end = this.#engine.save();
    const { interrupt } = this.#options;
    const period = this.#period;
    try {
      const start = await leadIn(this.#engine, this.#inputs!, this.#marks, period, interrupt);
      return { repetition: { leadIn: start, period } };
    } catch (error) {
      if (!interrupt?.aborted) throw error;
      const known = `states repeat every ${counted(period, 'cycle')}, at the latest from cycle`;
      const note = `${known} ${this.#marks.at(-1)!.cycle} on; the first was not looked for`;
      return { notes: [note] };
    } finally {
      this.#engine.restore(end);
    }
  }

  discard(): void {
    // It holds nothing but points.
  }

  #start(): void {
    const { rows } = this.#options;
    const { before } = this.#engine.save();
    const held = before ?? rowOfZeros(this.#engine);
    this.#inputs = new HeldInputs(this.#engine, rows === undefined ? this.#cycle : 0, rows ?? held);
    this.#mark();
  }

  // Where rows or clocks have a pattern, only states at the same place of it are the same.
  #mark(): void {
    this.#marks.push({ cycle: this.#cycle, point: this.#engine.save(), until: this.#cycle });
    this.#engine.mark(leastMultiple(this.#inputs!.period, this.#patternLength));
  }
}

const rowOfZeros = ({ layout: { inputs, threeValued } }: Engine): Uint32Array =>
  new Uint32Array(inputs.words * (threeValued ? 2 : 1));

function leastMultiple(a: number, b: number): number {
  let [x, y] = [a, b];
  while (y !== 0) [x, y] = [y, x % y];
  return (a / x) * b;
}
