import { LANES } from './lanes.js';

/**
 * Vectors that code loads from memory. As constants of the code they would be put together from
 * four pieces wherever they are used.
 */
export class ConstantPool {
  readonly #start: number;
  readonly #places = new Map<string, number>();
  readonly #bytes: number[] = [];

  /** The address of the first constant, a multiple of sixteen. */
  constructor(start: number) {
    this.#start = start;
  }

  /** The address of a constant of sixteen bytes. */
  addressOf(bytes: readonly number[]): number {
    const key = bytes.join();
    let place = this.#places.get(key);
    if (place === undefined) {
      place = this.#start + this.#bytes.length;
      this.#places.set(key, place);
      this.#bytes.push(...bytes);
    }
    return place;
  }

  /** What must stand from the first address on. */
  get data(): { readonly at: number; readonly data: Uint8Array } {
    return { at: this.#start, data: Uint8Array.from(this.#bytes) };
  }

  /** The first address behind all constants. */
  get end(): number {
    return this.#start + Math.ceil(this.#bytes.length / LANES) * LANES;
  }
}
