import type { Value } from '../../circuit/values.js';

/** What a memory holds at power-up, as one module sees it. */
export interface Contents {
  /** A bit of a word, from the right: 0, 1, or 2 where nothing is given. */
  bit(word: number, bit: number): Value;
  /** Gives a bit of a word a value. */
  setBit(word: number, bit: number, value: Value): void;
}

/**
 * What a memory holds at power-up as far as the netlist says, in the bytes of `Engine.memoryState`
 * of a three-valued run. Takes no room until something is said.
 */
export class InitialContents implements Contents {
  readonly #width: number;
  readonly #depth: number;
  readonly #group: number;
  #bytes: Uint8Array | undefined;

  constructor(width: number, depth: number) {
    this.#width = width;
    this.#depth = depth;
    this.#group = Math.ceil(width / 8);
  }

  /** The bytes; undefined where nothing has been said. */
  get bytes(): Uint8Array | undefined {
    return this.#bytes;
  }

  /** The same contents, to be changed apart. */
  copy(): InitialContents {
    const copy = new InitialContents(this.#width, this.#depth);
    copy.#bytes = this.#bytes?.slice();
    return copy;
  }

  bit(word: number, bit: number): Value {
    if (this.#bytes === undefined) return 2;
    const at = word * 2 * this.#group + (bit >>> 3);
    const isSet = (byte: number): boolean => ((byte >>> (bit & 7)) & 1) === 1;
    if (isSet(this.#bytes[at + this.#group]!)) return 2;
    return isSet(this.#bytes[at]!) ? 1 : 0;
  }

  setBit(word: number, bit: number, value: Value): void {
    this.#bytes ??= this.#unknown();
    const bytes = this.#bytes;
    const at = word * 2 * this.#group + (bit >>> 3);
    const mask = 1 << (bit & 7);
    bytes[at] = value === 1 ? bytes[at]! | mask : bytes[at]! & ~mask;
    const unknown = bytes[at + this.#group]!;
    bytes[at + this.#group] = value === 2 ? unknown | mask : unknown & ~mask;
  }

  #unknown(): Uint8Array {
    const group = this.#group;
    const bytes = new Uint8Array(this.#depth * 2 * group);
    const last = this.#width % 8 === 0 ? 0xff : (1 << (this.#width % 8)) - 1;
    for (let at = group; at < bytes.length; at += 2 * group) {
      bytes.fill(0xff, at, at + group - 1);
      bytes[at + group - 1] = last;
    }
    return bytes;
  }
}

/** What a module says of the contents of a memory of another module. */
export class FarContents implements Contents {
  readonly #base: Contents;
  readonly #width: number;
  readonly #told: InitialContents;
  /** A bit for each one of the memory that the module gives; absent until there is one. */
  #isTold: Uint8Array | undefined;
  readonly #bits: number;

  /** `base` tells of bits that the module does not give. */
  constructor(width: number, depth: number, base: Contents) {
    this.#base = base;
    this.#width = width;
    this.#bits = width * depth;
    this.#told = new InitialContents(width, depth);
  }

  get isEmpty(): boolean {
    return this.#isTold === undefined;
  }

  bit(word: number, bit: number): Value {
    return this.#has(word * this.#width + bit)
      ? this.#told.bit(word, bit)
      : this.#base.bit(word, bit);
  }

  setBit(word: number, bit: number, value: Value): void {
    this.#isTold ??= new Uint8Array(Math.ceil(this.#bits / 8));
    const place = word * this.#width + bit;
    this.#isTold[place >>> 3]! |= 1 << (place & 7);
    this.#told.setBit(word, bit, value);
  }

  /** Lays what the module says over other contents of the same memory. */
  layOver(contents: Contents): void {
    for (let place = 0; place < this.#bits; place++) {
      if (!this.#has(place)) continue;
      const word = Math.floor(place / this.#width);
      const bit = place - word * this.#width;
      contents.setBit(word, bit, this.#told.bit(word, bit));
    }
  }

  #has(place: number): boolean {
    return this.#isTold !== undefined && ((this.#isTold[place >>> 3]! >>> (place & 7)) & 1) === 1;
  }
}
