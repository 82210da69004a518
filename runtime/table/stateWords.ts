import type { StateMap } from '../stateBits.js';

/** Brings bit 0 of each of four bytes of a word into its four highest bits, in order. */
const GATHER = 0x10204080;

/**
 * State bits as a compiled model keeps them, one byte each, and packed into words: bit b of the
 * state is bit `b % 32` of word `b >> 5`.
 *
 * What stands in a byte beside bit 0, and in bytes that hold no state, does not count.
 */
export class StateWords {
  /** Words of a packed state; at least one. */
  readonly width: number;
  readonly #count: number;
  readonly #mask: Uint32Array;

  constructor({ states }: StateMap) {
    this.#count = states.length;
    this.width = Math.max(1, Math.ceil(states.length / 32));
    this.#mask = new Uint32Array(this.width);
    states.forEach(({ role }, bit) => {
      if (role !== 'unused') this.#mask[bit >>> 5]! |= 1 << (bit & 31);
    });
  }

  /** Packs the state at an address, a multiple of 4, into `packed`. */
  pack(memory: Uint32Array, address: number, packed: Uint32Array): void {
    let at = address >>> 2;
    for (let word = 0; word < this.width; word++) {
      let bits = 0;
      for (let place = 0; place < 32; place += 4, at++) {
        bits |= (Math.imul(memory[at]! & 0x01010101, GATHER) >>> 28) << place;
      }
      packed[word] = bits & this.#mask[word]!;
    }
  }

  /** Writes the bytes of a packed state to an address. */
  unpack(packed: Uint32Array, memory: Uint8Array, address: number): void {
    for (let bit = 0; bit < this.#count; bit++) {
      memory[address + bit] = (packed[bit >>> 5]! >>> (bit & 31)) & 1;
    }
  }
}
