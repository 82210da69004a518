import type { Position } from '../../diagnostics/sourceMap.js';

/** What any text may take; a long one may take more. */
export interface Allowance {
  /** Steps. */
  readonly work: number;
  /** Numbers of 32 bits that hold what the modules of a design record. */
  readonly numbers: number;
}

/** Some seconds of unrolling, and half a gigabyte. */
const generous: Allowance = { work: 10_000_000, numbers: 1 << 27 };

// What each byte of a text allows for on top of that.
const WORK_PER_BYTE = 64;
const NUMBERS_PER_BYTE = 8;

/** Values wider than this take more for each bit. */
const WIDE = 1024;

/** Work that each expression and process may take without anything being charged. */
const FREE_WORK = 256;

/**
 * How deep expressions, statements, calls, generate blocks and instances may nest in each other
 * while they are worked out. The stack of Node holds about half as many again.
 */
const MOST_DEPTH = 1300;

interface Placed {
  readonly start: Position;
  readonly end: Position;
}

/** A place as index of a source and byte offset in it. */
interface Origin {
  readonly source: number;
  readonly offset: number;
}

/** Ends the elaboration of a text that asks for more than can be built; see `Budget`. */
export class BudgetExceeded extends Error {
  /** Where in the text. */
  readonly place: Placed | Origin;

  constructor(message: string, place: Placed | Origin) {
    super(message);
    this.name = 'BudgetExceeded';
    this.place = place;
  }
}

/**
 * What one elaboration may take: a few lines can ask for loops, recursions and ranges that would
 * never end or fill all memory. Text that says what it means at length is not kept from that.
 *
 * Work is counted in steps of about a quarter of a microsecond.
 */
export class Budget {
  readonly #mostWork: number;
  readonly #mostNumbers: number;
  #free = 0;
  #work = 0;
  #numbers = 0;
  #depth = 0;
  #place: Placed = { start: 0, end: 0 };

  /** `bytes` is the length of all texts. */
  constructor(bytes = 0, { work, numbers }: Allowance = generous) {
    this.#mostWork = work + bytes * WORK_PER_BYTE;
    this.#mostNumbers = numbers + bytes * NUMBERS_PER_BYTE;
  }

  /** Begins an expression or process, of which the first steps are free. */
  begin(place: Placed): void {
    this.#free = FREE_WORK;
    this.#place = place;
  }

  /** Takes a number of steps. Throws `BudgetExceeded`, at the place entered last. */
  spend(steps: number): void {
    if (this.#free >= steps) {
      this.#free -= steps;
      return;
    }
    this.#work += steps;
    if (this.#work <= this.#mostWork) return;
    const message =
      'expanding loops, calls and wide values has taken too long when this was reached ' +
      `(${millions(this.#mostWork)} million steps); give them smaller bounds`;
    throw new BudgetExceeded(message, this.#place);
  }

  /** Goes deeper, a level in general, which takes a step and some for the bits of a width. */
  enter(place: Placed, width: number, levels = 1): void {
    this.#place = place;
    this.spend(1 + (width >>> (width > WIDE ? 2 : 4)));
    this.#depth += levels;
    if (this.#depth <= MOST_DEPTH) return;
    const message =
      'expressions, statements, calls and the like are nested more than ' +
      `${MOST_DEPTH} deep here; divide them`;
    throw new BudgetExceeded(message, place);
  }

  /** Ends what `enter` began. */
  leave(levels = 1): void {
    this.#depth -= levels;
  }

  /** Takes room for some numbers; false where there is not so much. */
  grow(numbers: number): boolean {
    this.#numbers += numbers;
    return this.#numbers <= this.#mostNumbers;
  }
}

/** The exception for what `Budget.grow` has no room for. */
export function tooLarge(place: Placed | Origin): BudgetExceeded {
  const message =
    'the design has become too large to be held in memory when this was reached; ' +
    'look for a range, an array or a generate loop with too large a bound';
  return new BudgetExceeded(message, place);
}

const millions = (count: number): number => Math.round(count / 1e6);
