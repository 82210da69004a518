import type { NameId } from '../../names.js';

const EMPTY = 0xffffffff;

/** A map from names to small numbers: eight to sixteen bytes an entry, no objects. */
export class NameIndex {
  // Pairs of name and number in an open hash table; its capacity is a power of two.
  #slots: Uint32Array;
  #count = 0;

  constructor(capacity = 4) {
    this.#slots = new Uint32Array(2 * capacity).fill(EMPTY);
  }

  /** The number of a name, or -1 if it has none. */
  get(name: NameId): number {
    const slot = this.#slot(name);
    return this.#slots[slot] === name ? this.#slots[slot + 1]! : -1;
  }

  /** Gives a name its number. */
  set(name: NameId, value: number): void {
    let slot = this.#slot(name);
    if (this.#slots[slot] !== name) {
      if (this.#count * 4 >= this.#slots.length) {
        this.#grow();
        slot = this.#slot(name);
      }
      this.#slots[slot] = name;
      this.#count++;
    }
    this.#slots[slot + 1] = value;
  }

  // Name ids are dense, so that a multiplicative hash spreads them well. The multiplier is 2^32
  // divided by the golden ratio (Knuth, TAOCP vol. 3, 6.4; from memory).
  #slot(name: NameId): number {
    const slots = this.#slots;
    const mask = slots.length - 2;
    let slot = (Math.imul(name, 0x9e3779b1) >>> 6) & mask;
    while (slots[slot] !== EMPTY && slots[slot] !== name) slot = (slot + 2) & mask;
    return slot;
  }

  #grow(): void {
    const old = this.#slots;
    this.#slots = new Uint32Array(old.length * 2).fill(EMPTY);
    for (let i = 0; i < old.length; i += 2) {
      if (old[i] === EMPTY) continue;
      const slot = this.#slot(old[i]!);
      this.#slots[slot] = old[i]!;
      this.#slots[slot + 1] = old[i + 1]!;
    }
  }
}
