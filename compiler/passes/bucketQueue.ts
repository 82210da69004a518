/**
 * A priority queue of items 0 … n-1 whose small whole priorities only fall: one list for each
 * priority, so that every step takes constant time. Among equals, the one listed last comes first.
 */
export class BucketQueue {
  readonly #priority: Uint32Array;
  readonly #first: Int32Array;
  readonly #after: Int32Array;
  readonly #before: Int32Array;
  readonly #taken: Uint8Array;
  #least = 0;

  constructor(priorities: Uint32Array) {
    const count = priorities.length;
    this.#priority = priorities.slice();
    this.#first = new Int32Array(priorities.reduce((most, p) => Math.max(most, p), 0) + 1).fill(-1);
    this.#after = new Int32Array(count).fill(-1);
    this.#before = new Int32Array(count).fill(-1);
    this.#taken = new Uint8Array(count);
    // Backwards, so that equal items are taken in their own order.
    for (let item = count - 1; item >= 0; item--) this.#link(item);
  }

  /** Removes and returns an item of least priority, or -1 when none is left. */
  takeLeast(): number {
    while (this.#least < this.#first.length) {
      const item = this.#first[this.#least]!;
      if (item >= 0) {
        this.#unlink(item);
        this.#taken[item] = 1;
        return item;
      }
      this.#least++;
    }
    return -1;
  }

  /** Lowers an item's priority by one; items already taken are left alone. */
  decrease(item: number): void {
    if (this.#taken[item]) return;
    this.#unlink(item);
    this.#priority[item]!--;
    this.#link(item);
    if (this.#priority[item]! < this.#least) this.#least = this.#priority[item]!;
  }

  #link(item: number): void {
    const priority = this.#priority[item]!;
    const next = this.#first[priority]!;
    this.#after[item] = next;
    this.#before[item] = -1;
    if (next >= 0) this.#before[next] = item;
    this.#first[priority] = item;
  }

  #unlink(item: number): void {
    const before = this.#before[item]!;
    const after = this.#after[item]!;
    if (before >= 0) this.#after[before] = after;
    else this.#first[this.#priority[item]!] = after;
    if (after >= 0) this.#before[after] = before;
  }
}
