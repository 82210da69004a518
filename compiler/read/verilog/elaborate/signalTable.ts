import { GrowableUint32 } from '../../../circuit/growable.js';
import type { LazyList, NameSource, Signal } from '../../../circuit/hierarchy.js';
import type { NameId } from '../../names.js';

/** What few signals have. */
export interface Rarity {
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
  readonly isSigned: boolean;
  /** Of a word of a memory, whose name is not the text of the `NameId`. */
  readonly name: string | undefined;
}

/** The signals of a module in order: eight bytes for each scalar, of which there are a million. */
export class SignalTable implements LazyList<Signal> {
  readonly #names: NameSource;
  // The name of each signal and then its offset.
  readonly #columns: GrowableUint32;
  #rarities: Map<number, Rarity> | undefined;
  #bits = 0;

  /** Room for `expected` signals is made at once. */
  constructor(names: NameSource, expected = 2) {
    this.#names = names;
    this.#columns = new GrowableUint32(2 * Math.max(expected, 1));
  }

  get length(): number {
    return this.#columns.length >> 1;
  }

  /** Sum of the widths so far. */
  get bits(): number {
    return this.#bits;
  }

  /** Adds a scalar. */
  pushScalar(name: NameId): void {
    this.#columns.push(name);
    this.#columns.push(this.#bits++);
  }

  /** Adds any signal. */
  push(name: NameId, rarity: Rarity): void {
    const { msb, lsb } = rarity;
    this.#rarities ??= new Map();
    this.#rarities.set(this.length, rarity);
    this.#columns.push(name);
    this.#columns.push(this.#bits);
    this.#bits += Math.abs(msb - lsb) + 1;
  }

  at(index: number): Signal | undefined {
    if (index < 0 || index >= this.length) return undefined;
    const { msb, lsb, isVector, isSigned, name } = this.#rarities?.get(index) ?? scalar;
    return {
      name: name ?? this.#names.text(this.#columns.get(2 * index)),
      msb,
      lsb,
      isVector,
      ...(isSigned && { isSigned }),
      offset: this.#columns.get(2 * index + 1),
      width: Math.abs(msb - lsb) + 1,
    };
  }

  *[Symbol.iterator](): Iterator<Signal> {
    for (let index = 0; index < this.length; index++) yield this.at(index)!;
  }
}

const scalar: Rarity = { msb: 0, lsb: 0, isVector: false, isSigned: false, name: undefined };
