/**
 * Numbers rows of 32-bit words from 0 on, in the order in which they first come.
 *
 * An open hash table over one array of words: no object for a row.
 */
export class RowIds {
  readonly #width: number;
  #rows: Uint32Array;
  /** Number of a row plus one, 0 where there is none. */
  #slots = new Int32Array(64);
  #count = 0;

  /** Of rows of `width` words. */
  constructor(width: number) {
    this.#width = width;
    this.#rows = new Uint32Array(16 * width);
  }

  /** Rows known. */
  get count(): number {
    return this.#count;
  }

  /** The number of a row; it is known from now on. */
  idOf(row: Uint32Array): number {
    let slot = this.#hash(row);
    const mask = this.#slots.length - 1;
    for (; this.#slots[slot] !== 0; slot = (slot + 1) & mask) {
      const id = this.#slots[slot]! - 1;
      if (this.#isRow(id, row)) return id;
    }
    const id = this.#count++;
    this.#slots[slot] = id + 1;
    this.#keep(id, row);
    if (2 * this.#count > this.#slots.length) this.#rehash();
    return id;
  }

  /** The words of a row that has a number; a view that the next new row may cut off. */
  row(id: number): Uint32Array {
    return this.#rows.subarray(id * this.#width, (id + 1) * this.#width);
  }

  // Multiply and shift in turn, with the constants of the finalizer of MurmurHash3 (Appleby, 2011,
  // in the public domain): every bit of the row reaches the low bits.
  #hash(row: Uint32Array): number {
    let hash = 0;
    for (let i = 0; i < this.#width; i++) {
      hash = Math.imul(hash ^ row[i]!, 0x85ebca6b);
      hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35);
      hash ^= hash >>> 16;
    }
    return hash & (this.#slots.length - 1);
  }

  #isRow(id: number, row: Uint32Array): boolean {
    const from = id * this.#width;
    for (let i = 0; i < this.#width; i++) if (this.#rows[from + i] !== row[i]) return false;
    return true;
  }

  #keep(id: number, row: Uint32Array): void {
    const from = id * this.#width;
    if (from + this.#width > this.#rows.length) {
      const grown = new Uint32Array(2 * this.#rows.length);
      grown.set(this.#rows);
      this.#rows = grown;
    }
    for (let i = 0; i < this.#width; i++) this.#rows[from + i] = row[i]!;
  }

  #rehash(): void {
    this.#slots = new Int32Array(2 * this.#slots.length);
    const mask = this.#slots.length - 1;
    for (let id = 0; id < this.#count; id++) {
      let slot = this.#hash(this.row(id));
      while (this.#slots[slot] !== 0) slot = (slot + 1) & mask;
      this.#slots[slot] = id + 1;
    }
  }
}
