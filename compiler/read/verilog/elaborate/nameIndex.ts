import { giveBack, numberList } from '../../../circuit/numberLists.js';
import type { NameId } from '../../names.js';

const EMPTY = 0xffffffff;

// From so many entries on a table may be a plain list, if a quarter of that list is in use.
const LEAST_DENSE = 4096;
const SPARSITY = 4;

/** A map from names to numbers below 2^31 - 1: some eight to sixteen bytes an entry, no objects. */
export class NameIndex {
  // Pairs of name and number in an open hash table; its capacity is a power of two.
  #slots: Uint32Array;
  #count = 0;
  #greatest = 0;
  /** In place of the hash table: one more than the number of each name, 0 for none. */
  #dense: Int32Array | undefined;

  constructor(capacity = 4) {
    this.#slots = emptySlots(2 * capacity);
  }

  /** The number of a name, or -1 if it has none. */
  get(name: NameId): number {
    const dense = this.#dense;
    if (dense !== undefined) return name < dense.length ? dense[name]! - 1 : -1;
    const slot = this.#slot(name);
    return this.#slots[slot] === name ? this.#slots[slot + 1]! : -1;
  }

  /** All names and their numbers. */
  *[Symbol.iterator](): Iterator<[name: NameId, value: number]> {
    const dense = this.#dense;
    for (let name = 0; dense !== undefined && name < dense.length; name++) {
      if (dense[name] !== 0) yield [name, dense[name]! - 1];
    }
    const slots = this.#slots;
    for (let i = 0; i < slots.length; i += 2) {
      if (slots[i] !== EMPTY) yield [slots[i]!, slots[i + 1]!];
    }
  }

  /** Makes room for so many entries more, whose names are all below `end`. */
  reserve(more: number, end: NameId): void {
    const count = this.#count + more;
    if (this.#dense === undefined && count >= LEAST_DENSE && end < SPARSITY * count) {
      this.#makeDense(end);
    }
  }

  /** Gives a name its number. */
  set(name: NameId, value: number): void {
    if (this.#dense === undefined && this.#count * 4 >= this.#slots.length) this.#grow();
    if (name > this.#greatest) this.#greatest = name;
    if (this.#dense !== undefined) {
      if (name >= this.#dense.length) this.#dense = longer(this.#dense, 2 * name);
      this.#dense[name] = value + 1;
      return;
    }
    const slot = this.#slot(name);
    if (this.#slots[slot] !== name) {
      this.#slots[slot] = name;
      this.#count++;
    }
    this.#slots[slot + 1] = value;
  }

  // Name ids are dense, so that a multiplicative hash spreads them well. The multiplier is 2^32
  // divided by the golden ratio (Knuth, TAOCP vol. 3, 6.4; from memory). Eight names in a row stay
  // together, in one line of the cache: netlists use them together.
  #slot(name: NameId): number {
    const slots = this.#slots;
    const mask = slots.length - 2;
    const spread = (Math.imul(name >>> 3, 0x9e3779b1) >>> 6) << 4;
    let slot = (spread | ((name & 7) << 1)) & mask;
    while (slots[slot] !== EMPTY && slots[slot] !== name) slot = (slot + 2) & mask;
    return slot;
  }

  #grow(): void {
    const old = this.#slots;
    if (this.#count >= LEAST_DENSE && this.#greatest < SPARSITY * this.#count) {
      this.#makeDense(2 * this.#greatest);
      return;
    }
    this.#slots = emptySlots(2 * old.length);
    for (let i = 0; i < old.length; i += 2) {
      if (old[i] === EMPTY) continue;
      const slot = this.#slot(old[i]!);
      this.#slots[slot] = old[i]!;
      this.#slots[slot + 1] = old[i + 1]!;
    }
    giveBack(old);
  }

  #makeDense(length: number): void {
    const old = this.#slots;
    const dense = new Int32Array(length);
    for (let i = 0; i < old.length; i += 2) {
      if (old[i] !== EMPTY) dense[old[i]!] = old[i + 1]! + 1;
    }
    this.#dense = dense;
    this.#slots = new Uint32Array(0);
    giveBack(old);
  }
}

/** Room for a power of two of numbers. */
function emptySlots(length: number): Uint32Array {
  return numberList(length).fill(EMPTY);
}

function longer(list: Int32Array, length: number): Int32Array {
  const made = new Int32Array(length);
  made.set(list);
  return made;
}
