/** A list of numbers for each of the items 0 … n-1, all in one array. */
export class Lists {
  /** The list of item i stands in `members` from `start[i]` up to `start[i + 1]`. */
  readonly start: Uint32Array;
  readonly members: Uint32Array;

  /**
   * `walk` adds each member to the list of an item. It is called twice, to count and to place: that
   * takes no list of pairs.
   */
  constructor(items: number, walk: (add: (item: number, member: number) => void) => void) {
    const start = new Uint32Array(items + 1);
    walk((item) => {
      start[item + 1]!++;
    });
    for (let item = 0; item < items; item++) start[item + 1]! += start[item]!;
    const members = new Uint32Array(start[items]!);
    const next = start.slice();
    walk((item, member) => {
      members[next[item]!++] = member;
    });
    this.start = start;
    this.members = members;
  }

  /** The list of an item. */
  of(item: number): Uint32Array {
    return this.members.subarray(this.start[item]!, this.start[item + 1]!);
  }
}
