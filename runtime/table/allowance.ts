/** What a new entry of the table costs, in cycles that are looked up. */
const ENTRY = 64;

/** Entries that are made before it counts how often they are used. */
const FIRST_ENTRIES = 1 << 13;

/** Cycles of straight-line code in which one entry more may be made. */
const CYCLES_PER_ENTRY = 512;

/** Cycles of straight-line code in a row. */
const REST = 1 << 14;

/**
 * Decides whether a run goes on by table. Entries cost and cycles that are looked up earn; when all
 * is spent, straight-line code runs for a while, so that a machine whose states hardly come again
 * loses some hundredths of its speed, while one that repeats after long is learnt in the end.
 */
export class Allowance {
  #left = ENTRY * FIRST_ENTRIES;
  #rest = 0;

  /** Cycles of straight-line code that come next; 0 where the table is used. */
  get rest(): number {
    return this.#rest;
  }

  /** Counts cycles that were looked up. */
  earn(cycles: number): void {
    this.#left = Math.min(this.#left + cycles, ENTRY * FIRST_ENTRIES);
  }

  /** Counts an entry made, or a cycle that could not become one. */
  spend(): void {
    this.#left -= ENTRY;
    if (this.#left < 0) this.#rest = REST;
  }

  /** Counts cycles of straight-line code. */
  pass(cycles: number): void {
    this.#rest -= cycles;
    if (this.#rest > 0) return;
    this.#rest = 0;
    this.#left = (ENTRY * REST) / CYCLES_PER_ENTRY;
  }
}
