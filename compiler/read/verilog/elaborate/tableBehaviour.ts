import type { Outcome, SequentialTable } from './primitiveTable.js';

/** An edge of an input: `value` is its level afterwards. */
export interface InputEdge {
  readonly input: number;
  readonly value: 0 | 1;
}

/**
 * What a sequential table does with its state, told for inputs that change one at a time.
 *
 * A change from levels that would have given another state never comes: a row for the end of a
 * reset may be for 0 alone, `? b (?1) : 0 : 0`. What the table leaves open there is left open.
 */
export class TableBehaviour {
  readonly inputs: number;
  /** Inputs that do something: all but the notifiers. */
  readonly live: readonly number[];
  readonly #table: SequentialTable;
  #notifiers = 0;

  constructor(table: SequentialTable) {
    this.inputs = table.inputs;
    this.#table = table;
    const all = Array.from({ length: table.inputs }, (_, input) => input);
    for (const input of all) if (this.#isNotifier(input)) this.#notifiers |= 1 << input;
    this.live = all.filter((input) => ((this.#notifiers >> input) & 1) === 0);
  }

  /** Combinations of input levels, with the notifiers at 0. */
  combinations(): number[] {
    return Array.from({ length: 1 << this.inputs }, (_, levels) => levels).filter(
      (levels) => (levels & this.#notifiers) === 0,
    );
  }

  /** The levels with the notifiers at 0, where tables of functions look them up. */
  normal(levels: number): number {
    return levels & ~this.#notifiers;
  }

  /** The value that the levels alone give whatever the state; undefined if they give none. */
  forced(levels: number): Outcome | undefined {
    const fromZero = this.#table.level(levels, 0);
    const fromOne = this.#table.level(levels, 1);
    if (fromZero === undefined || fromOne === undefined) return undefined;
    const value = resolved(fromZero, 0);
    return value === resolved(fromOne, 1) ? value : undefined;
  }

  /** Per combination of levels: what they alone give whatever the state, notifiers apart. */
  given(): (Outcome | undefined)[] {
    return Array.from({ length: 1 << this.inputs }, (_, levels) =>
      this.forced(this.normal(levels)),
    );
  }

  /**
   * The next state when an input has changed and the levels are now these; undefined if the levels
   * before would have given another state.
   */
  next(input: number, levels: number, state: number): Outcome | undefined {
    const before = this.forced(levels ^ (1 << input));
    if (before !== undefined && before !== 'x' && before !== resolved('-', state)) return undefined;
    return resolved(this.#table.event(input, levels, state), state);
  }

  /** The next state whichever input has changed; undefined if that makes a difference. */
  steady(levels: number, state: number): Outcome | undefined {
    const forced = this.forced(levels);
    if (forced !== undefined) return forced;
    const outcomes = new Set(this.live.map((input) => this.next(input, levels, state)));
    const isLeftOpen = outcomes.delete(undefined);
    if (outcomes.size === 0 && isLeftOpen) return resolved('-', state);
    return outcomes.size === 1 ? [...outcomes][0] : undefined;
  }

  /** The edges that give the state a new value which the levels alone would not. */
  clocks(): InputEdge[] {
    const clocks: InputEdge[] = [];
    for (const input of this.live) {
      for (const value of [1, 0] as const) {
        const captures = this.combinations().some(
          (levels) =>
            ((levels >> input) & 1) === value &&
            this.forced(levels) === undefined &&
            (this.next(input, levels, 0) === '1' || this.next(input, levels, 1) === '0'),
        );
        if (captures) clocks.push({ input, value });
      }
    }
    return clocks;
  }

  /** Whether an edge of `clocks` gives different values as other inputs or the state say. */
  ticks({ input, value }: InputEdge): boolean {
    const given = new Set<Outcome>();
    for (const levels of this.combinations()) {
      if (((levels >> input) & 1) !== value || this.forced(levels) !== undefined) continue;
      for (const state of [0, 1]) given.add(this.next(input, levels, state) ?? '-');
    }
    return given.has('0') && given.has('1');
  }

  /** Whether an input that is no notifier can make the output x. */
  becomesUnknown(): boolean {
    return this.combinations().some((levels) =>
      this.live.some((input) => [0, 1].some((state) => this.next(input, levels, state) === 'x')),
    );
  }

  /** The inputs on which it depends what the levels alone give, and those that decide alone. */
  levels(): { readonly levels: number[]; readonly forcing: Map<number, number> } {
    const given = Array.from({ length: 1 << this.inputs }, (_, place) => {
      const levels = this.normal(place);
      const value = this.steady(levels, 0);
      return value === this.steady(levels, 1) ? value : undefined;
    });
    const levels = this.live.filter((input) =>
      given.some((value, place) => value !== given[place ^ (1 << input)]),
    );
    const forcing = new Map<number, number>();
    for (const input of levels) {
      const decides = (value: number): boolean =>
        given.every((each, place) => ((place >> input) & 1) !== value || each !== undefined);
      const value = [0, 1].find(decides);
      if (value !== undefined) forcing.set(input, value);
    }
    return { levels, forcing };
  }

  /** Whether the levels give the state a value that lasts. */
  #isStill(levels: number, state: number): boolean {
    const level = this.#table.level(levels, state);
    if (level === undefined || this.forced(levels) !== undefined) return true;
    return resolved(level, state) === resolved('-', state);
  }

  // Any change makes the output x unless the levels dominate, and nothing else depends on it.
  #isNotifier(input: number): boolean {
    const bit = 1 << input;
    for (let levels = 0; levels < 1 << this.inputs; levels++) {
      for (const state of [0, 1]) {
        const level = this.#table.level(levels, state);
        if (level !== this.#table.level(levels ^ bit, state)) return false;
        if (level === undefined && this.#table.event(input, levels, state) !== 'x') return false;
        if (level !== undefined && !this.#isStill(levels, state)) return false;
        for (let other = 0; other < this.inputs; other++) {
          if (other === input) continue;
          const outcome = this.#table.event(other, levels, state);
          if (outcome !== this.#table.event(other, levels ^ bit, state)) return false;
        }
      }
    }
    return true;
  }
}

const resolved = (outcome: Outcome, state: number): Outcome =>
  outcome === '-' ? (state === 1 ? '1' : '0') : outcome;
