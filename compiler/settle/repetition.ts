/** Something with a state that follows from the state one cycle before. */
export interface Moving<S> {
  /** A copy of its state. */
  snapshot(): S;
  /** Whether its state is the one copied. */
  isAt(snapshot: S): boolean;
}

/** How a state goes on for ever, seen from cycles in which it has done so already. */
export type Continuation =
  /** Nothing changes after so many cycles. */
  | { readonly kind: 'still'; readonly after: number }
  /** After so many cycles at the latest the same states come again every `period` cycles. */
  | { readonly kind: 'repeats'; readonly after: number; readonly period: number };

/**
 * Finds out whether a state stands still or repeats, in constant memory and with two comparisons a
 * cycle.
 *
 * A state found again is exactly the same one. Method: R. P. Brent, "An improved Monte Carlo
 * factorization algorithm", BIT 20, 1980: the state is compared with one saved at a moment that
 * moves on by powers of two.
 */
export class Repetition<S> {
  /** What has been found; undefined while nothing is. */
  found: Continuation | undefined;
  readonly #step: number;
  #before: S | undefined;
  #movedAfter = 0;
  #saved: { readonly state: S; readonly after: number } | undefined;
  #room = 1;
  #freeAfter: number | undefined;

  /** `step`: cycles after which the same state goes on in the same way; a multiple of it repeats. */
  constructor(step: number) {
    this.#step = step;
  }

  /**
   * Takes notice of the state after `after` cycles; call it for each number of cycles in turn.
   * `isFree` tells that the state alone decides what comes next, now and from now on.
   */
  look(after: number, moving: Moving<S>, isFree: boolean): void {
    if (this.found !== undefined) return;
    if (this.#before === undefined || !moving.isAt(this.#before)) {
      this.#before = moving.snapshot();
      this.#movedAfter = after;
    }
    if (!isFree) return;
    this.#freeAfter ??= after;
    this.#saved ??= { state: this.#before, after };
    const distance = after - this.#saved.after;
    if (after - Math.max(this.#movedAfter, this.#freeAfter) >= this.#step) {
      this.found = { kind: 'still', after: this.#movedAfter };
    } else if (distance > 0 && distance % this.#step === 0 && moving.isAt(this.#saved.state)) {
      this.found = { kind: 'repeats', after: this.#saved.after, period: distance };
    } else if (distance >= this.#room * this.#step) {
      this.#saved = { state: this.#before, after };
      this.#room *= 2;
    }
  }
}
