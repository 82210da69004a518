/** From so many completed cycles on, a set had so many members. */
export type Step = readonly [after: number, members: number];

/**
 * Follows a set of numbered things from cycle to cycle: how many are in it, when each last was, and
 * when it last changed.
 */
export class MemberCourse {
  /** The size of the set wherever it changes, from after 0 cycles on. */
  readonly steps: Step[] = [];
  /** Per thing, the number of cycles after which it was in the set for the last time; -1 if never. */
  readonly last: Float64Array;
  /** The number of cycles after which the set last changed; 0 where it never did. */
  changedAfter = 0;
  readonly #isMember: Uint8Array;

  constructor(count: number) {
    this.last = new Float64Array(count).fill(-1);
    this.#isMember = new Uint8Array(count);
  }

  /** Takes down the members after `after` cycles; call it for each number of cycles in turn. */
  note(after: number, members: readonly number[]): void {
    for (const member of members) this.last[member] = after;
    let hasChanged = false;
    for (let i = 0; i < this.last.length; i++) {
      const isMember = this.last[i] === after ? 1 : 0;
      if (isMember === this.#isMember[i]) continue;
      this.#isMember[i] = isMember;
      hasChanged = true;
    }
    if (hasChanged && after > 0) this.changedAfter = after;
    if (this.steps.at(-1)?.[1] !== members.length) this.steps.push([after, members.length]);
  }
}
