import type { ModelLayout } from '../../runtime/layout.js';
import { type Departure, departureText, ExpectationChecker } from '../../runtime/node/index.js';
import type { ResponseBlock } from '../../runtime/stream.js';
import type { Mismatch } from './runSummary.js';

/** Departures told one by one; further ones are counted. */
const MOST_TOLD = 50;

/** Compares a response with an expectation and counts where it departs. */
export class Departures {
  first: Mismatch | undefined;
  count = 0;
  readonly #checker: ExpectationChecker;
  readonly #all: boolean;
  readonly #tell: (text: string) => void;

  private constructor(checker: ExpectationChecker, all: boolean, tell: (text: string) => void) {
    this.#checker = checker;
    this.#all = all;
    this.#tell = tell;
  }

  /** Opens an expectation table. With `all`, departures do not end the run. */
  static async open(
    path: string,
    layout: ModelLayout,
    { all, onDeparture }: { all?: boolean; onDeparture?: (text: string) => void },
  ): Promise<Departures> {
    const checker = await ExpectationChecker.open(path, layout);
    return new Departures(checker, all ?? false, onDeparture ?? (() => undefined));
  }

  /** Looks at a block; returns the cycle of a departure that ends the run. */
  async check(block: ResponseBlock): Promise<number | undefined> {
    const found = await this.#checker.check(block, this.#all ? Number.POSITIVE_INFINITY : 1);
    for (const departure of found) this.#note(departure);
    return this.#all ? undefined : found[0]?.cycle;
  }

  /** The first cycle that the table tells of and the response did not reach. */
  finish(): Promise<number | undefined> {
    return this.#checker.finish();
  }

  #note(departure: Departure): void {
    if (this.count++ < MOST_TOLD) this.#tell(departureText(departure));
    if (this.first !== undefined) return;
    const { cycle, port, expected, actual } = departure;
    this.first = { cycle, port, expected, actual };
  }
}
