import { type BitCopy, copyBits } from '../../runtime/bitCopies.js';
import { type RowLayout, rowStride } from '../../runtime/layout.js';

/** Turns packed rows of one layout into rows of another; bits without a source are 0. */
export class RowMapper {
  readonly #copies: readonly BitCopy[];
  readonly #from: RowLayout;
  readonly #to: RowLayout;
  readonly #isThreeValued: boolean;
  #rows = new Uint32Array(0);

  constructor(from: RowLayout, to: RowLayout, copies: readonly BitCopy[], isThreeValued: boolean) {
    this.#from = from;
    this.#to = to;
    this.#copies = copies;
    this.#isThreeValued = isThreeValued;
  }

  /** Maps `count` rows, `stride` words apart, to rows without gaps; the array is used again. */
  map(rows: Uint32Array, stride: number, count: number): Uint32Array {
    const to = rowStride(this.#to, this.#isThreeValued);
    if (this.#rows.length < count * to) this.#rows = new Uint32Array(count * to);
    for (let row = 0; row < count; row++) {
      const from = row * stride;
      copyBits(this.#copies, rows, from, this.#rows, row * to);
      if (!this.#isThreeValued) continue;
      const unknown = row * to + this.#to.words;
      copyBits(this.#copies, rows, from + this.#from.words, this.#rows, unknown);
    }
    return this.#rows;
  }
}
