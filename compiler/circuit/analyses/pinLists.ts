import { NO_NET } from '../ids.js';

/** Which entries of a column of pins hang on each net: the registers clocked by it, say. */
export class PinLists {
  readonly #first: Int32Array;
  readonly #next: Int32Array;

  /** `pins` has a net, or `NO_NET`, for each entry. */
  constructor(netCount: number, pins: Uint32Array) {
    this.#first = new Int32Array(netCount).fill(-1);
    this.#next = new Int32Array(pins.length);
    for (let entry = pins.length - 1; entry >= 0; entry--) {
      const net = pins[entry]!;
      if (net === NO_NET) continue;
      this.#next[entry] = this.#first[net]!;
      this.#first[net] = entry;
    }
  }

  /** The first entry on a net, or -1. */
  first(net: number): number {
    return this.#first[net]!;
  }

  /** The entry after another on the same net, or -1. */
  next(entry: number): number {
    return this.#next[entry]!;
  }
}
