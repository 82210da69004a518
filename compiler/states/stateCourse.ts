import { readBits } from '../../runtime/rowBits.js';
import { formatValue } from '../../runtime/valueText.js';
import type { OutletBlock, WatchedPlace } from '../run/outlets/outlet.js';
import type { StatesSummary } from '../run/outlets/statesSummary.js';
import type { StateVector } from './stateVectors.js';

/** Most different states and transitions that are told apart. */
export const MOST_STATES = 4096;
export const MOST_TRANSITIONS = 65_536;

/** A state by its bits where they make one number without x, else by its text. */
type Key = number | string;

/** What a course keeps to go on later: columns of equal length. */
export interface SavedStates {
  readonly keys: readonly Key[];
  readonly values: readonly string[];
  readonly cycles: readonly number[];
  readonly first: readonly number[];
  readonly from: readonly number[];
  readonly to: readonly number[];
  readonly count: readonly number[];
  readonly taken: readonly number[];
  readonly present: number;
  readonly followedTo: number | null;
}

/** Follows the states of some bits of watched rows. */
export class StateCourse {
  readonly #name: string;
  readonly #names: StateVector['names'];
  readonly #offset: number;
  readonly #width: number;
  readonly #place: WatchedPlace;
  /** Columns: of states, by number, then of transitions. */
  readonly #keys: Key[] = [];
  readonly #values: string[] = [];
  readonly #cycles: number[] = [];
  readonly #first: number[] = [];
  readonly #from: number[] = [];
  readonly #to: number[] = [];
  readonly #count: number[] = [];
  readonly #taken: number[] = [];
  readonly #numbers = new Map<Key, number>();
  /** From the number of a state times `MOST_STATES` plus that of the next one. */
  readonly #transitions = new Map<number, number>();
  #present = -1;
  /** The transition of the present state to itself, once it has been taken; else -1. */
  #stay = -1;
  /** How often it has been taken since it was counted last. */
  #stays = 0;
  #followedTo: number | null = null;
  /** The words of a row in which the bits stand: a 1 for each of these bits. */
  readonly #masks: Uint32Array;
  /** These words in the row before, and behind them those that tell x. */
  readonly #before: Uint32Array;

  /** Of the bits from bit `offset` on. */
  constructor({ name, nets, names }: StateVector, offset: number, place: WatchedPlace) {
    const { length: width } = nets;
    this.#name = name;
    this.#names = names;
    this.#offset = offset;
    this.#width = width;
    this.#place = place;
    const first = offset & 31;
    const words = Math.ceil((first + width) / 32);
    this.#masks = new Uint32Array(words).fill(0xffffffff);
    this.#masks[0]! &= -1 << first;
    this.#masks[words - 1]! &= -1 >>> ((32 - ((first + width) & 31)) & 31);
    this.#before = new Uint32Array(2 * words);
  }

  /** Goes on from what was saved. */
  restore(saved: SavedStates): void {
    const columns = [
      [this.#keys, saved.keys],
      [this.#values, saved.values],
      [this.#cycles, saved.cycles],
      [this.#first, saved.first],
      [this.#from, saved.from],
      [this.#to, saved.to],
      [this.#count, saved.count],
      [this.#taken, saved.taken],
    ] as [unknown[], readonly unknown[]][];
    for (const [column, values] of columns) column.push(...values);
    for (const [state, key] of this.#keys.entries()) this.#numbers.set(key, state);
    for (const [i, from] of this.#from.entries()) {
      this.#transitions.set(from * MOST_STATES + this.#to[i]!, i);
    }
    this.#followedTo = saved.followedTo;
    this.#present = saved.present;
  }

  save(): SavedStates {
    this.#countStays();
    return {
      ...{ keys: [...this.#keys], values: [...this.#values], cycles: [...this.#cycles] },
      ...{ first: [...this.#first], from: [...this.#from], to: [...this.#to] },
      ...{ count: [...this.#count], taken: [...this.#taken] },
      ...{ present: this.#present, followedTo: this.#followedTo },
    };
  }

  /** Takes the next cycles. */
  take({ firstCycle, cycles, watched }: OutletBlock): void {
    const { stride, firstWord } = this.#place;
    for (let row = 0; row < cycles && this.#followedTo === null; row++) {
      const at = row * stride + firstWord;
      if (this.#isSame(watched, at + (this.#offset >>> 5)) && this.#stay >= 0) this.#stays++;
      else this.#look(watched, at, firstCycle + row);
    }
  }

  summary(): StatesSummary {
    this.#countStays();
    const value = (state: number): string => this.#values[state]!;
    return {
      register: this.#name,
      states: this.#values.map((text, state) => ({
        value: text,
        cycles: this.#cycles[state]!,
        first: this.#first[state]!,
      })),
      transitions: this.#from.map((from, i) => ({
        ...{ from: value(from), to: value(this.#to[i]!) },
        ...{ count: this.#count[i]!, first: this.#taken[i]! },
      })),
      ...(this.#followedTo !== null && { followedTo: this.#followedTo }),
    };
  }

  // Takes over the words of a row from `at` on; returns whether the bits were the same before.
  #isSame(rows: Uint32Array, at: number): boolean {
    const { toUnknown } = this.#place;
    const [masks, before] = [this.#masks, this.#before];
    let differing = 0;
    for (let word = 0; word < masks.length; word++) {
      const bits = rows[at + word]!;
      differing |= (bits ^ before[word]!) & masks[word]!;
      before[word] = bits;
      if (toUnknown === undefined) continue;
      const unknown = rows[at + toUnknown + word]!;
      differing |= (unknown ^ before[masks.length + word]!) & masks[word]!;
      before[masks.length + word] = unknown;
    }
    return differing === 0;
  }

  #look(rows: Uint32Array, at: number, cycle: number): void {
    this.#countStays();
    const state = this.#stateAt(rows, at, cycle);
    const transition = state < 0 || this.#present < 0 ? -1 : this.#transition(state, cycle);
    if (state < 0 || (transition < 0 && this.#present >= 0)) {
      this.#followedTo = cycle - 1;
      return;
    }
    this.#cycles[state]!++;
    if (transition >= 0) this.#count[transition]!++;
    this.#stay = state === this.#present ? transition : -1;
    this.#present = state;
  }

  #countStays(): void {
    if (this.#stays === 0) return;
    this.#cycles[this.#present]! += this.#stays;
    this.#count[this.#stay]! += this.#stays;
    this.#stays = 0;
  }

  // The number of the state in a row, -1 where there are too many.
  #stateAt(rows: Uint32Array, at: number, cycle: number): number {
    const key = this.#keyOf(rows, at);
    const known = this.#numbers.get(key);
    if (known !== undefined) return known;
    const state = this.#keys.length;
    // A new state is reached by a new transition.
    if (state === MOST_STATES || this.#from.length === MOST_TRANSITIONS) return -1;
    this.#numbers.set(key, state);
    this.#keys.push(key);
    const name = typeof key === 'number' ? this.#names?.get(key) : undefined;
    this.#values.push(name ?? this.#text(rows, at));
    this.#cycles.push(0);
    this.#first.push(cycle);
    return state;
  }

  #keyOf(rows: Uint32Array, at: number): Key {
    const [offset, width] = [this.#offset, this.#width];
    const { toUnknown } = this.#place;
    if (width > 32) return this.#text(rows, at);
    const isKnown = toUnknown === undefined || readBits(rows, at + toUnknown, offset, width) === 0;
    return isKnown ? readBits(rows, at, offset, width) : this.#text(rows, at);
  }

  #text(rows: Uint32Array, at: number): string {
    const { toUnknown } = this.#place;
    const range = { offset: this.#offset, width: this.#width };
    return formatValue(range, rows, at, toUnknown === undefined ? undefined : at + toUnknown);
  }

  // The number of the way from the present state, -1 where there are too many.
  #transition(to: number, cycle: number): number {
    const key = this.#present * MOST_STATES + to;
    const known = this.#transitions.get(key);
    if (known !== undefined) return known;
    const transition = this.#from.length;
    if (transition === MOST_TRANSITIONS) return -1;
    this.#transitions.set(key, transition);
    this.#from.push(this.#present);
    this.#to.push(to);
    this.#count.push(0);
    this.#taken.push(cycle);
    return transition;
  }
}
