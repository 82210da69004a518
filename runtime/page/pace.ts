/** Time of a frame that cycles may take, in milliseconds, at least and at most. */
const LEAST_RUN_MS = 2;
const MOST_RUN_MS = 8;
/** A frame that took longer came late. */
const LATE_MS = 20;
/** After a longer pause, as of a page out of sight, only so much is made up for. */
const PAUSE_MS = 100;

/** How many cycles go into a frame, so that the picture keeps coming. */
export class Pace {
  /** Cycles a second; Infinity for as many as there is time for. */
  rate = Number.POSITIVE_INFINITY;
  /** Milliseconds that cycles may take in the present frame. */
  runMs = MOST_RUN_MS;
  #passed = 0;
  #owed = 0;

  /** Begins anew: nothing is owed. */
  restart(): void {
    this.#owed = 0;
  }

  /** Takes notice of a frame that comes so many milliseconds after the one before. */
  frame(passed: number): void {
    this.#passed = Math.min(PAUSE_MS, passed);
    // On a busy machine the picture comes first.
    const fitting = passed > LATE_MS ? this.runMs * 0.8 : this.runMs + 0.1;
    this.runMs = Math.max(LEAST_RUN_MS, Math.min(MOST_RUN_MS, fitting));
  }

  /** Cycles for the present frame at the rate, where a cycle takes so many milliseconds. */
  take(cycleMs: number): number {
    const room = this.room(cycleMs);
    if (this.rate === Number.POSITIVE_INFINITY) return room;
    const owed = this.#owed + (this.rate * this.#passed) / 1000;
    const cycles = Math.min(Math.floor(owed), room);
    // What a frame has no time for is not made up for later.
    this.#owed = Math.min(owed - cycles, 1);
    return cycles;
  }

  /** Cycles that the present frame has time for; at least one. */
  room(cycleMs: number): number {
    return Math.max(1, Math.floor(this.runMs / cycleMs));
  }
}
