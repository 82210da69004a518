import { NameTexts } from './nameTexts.js';

/** Index of a name in a `NameTable`; 0 is the empty name. */
export type NameId = number;

/** The hash that `intern` computes, of no bytes. */
export const EMPTY_HASH = 0x811c9dc5 | 0;

// FNV-1 (http://www.isthe.com/chongo/tech/comp/fnv/): as the last byte is only mixed in, names that
// differ in it, such as n10 … n19, have neighbouring slots and share a line of the cache.
const PRIME = 0x01000193;

/** The hash of some bytes and one more. */
export function hashStep(hash: number, byte: number): number {
  return Math.imul(hash, PRIME) ^ byte;
}

/**
 * Each distinct name once, as a number.
 *
 * Names are looked up by their bytes, so that reading a name that was seen before makes no string.
 */
export class NameTable {
  /** The names themselves. */
  readonly texts: NameTexts;
  // Pairs of an id (-1: none) and its name's hash.
  #slots: Int32Array;

  /** Room for `expected` names is made at once; more than that cost some copying. */
  constructor(expected = 1000) {
    const capacity = 2 ** Math.ceil(Math.log2(Math.max(expected, 1000)));
    this.texts = new NameTexts(capacity);
    this.#slots = new Int32Array(capacity * 4).fill(-1);
    this.intern(new Uint8Array(0), 0, 0);
  }

  get count(): number {
    return this.texts.count;
  }

  /** The id of the name in `bytes[start … end-1]` (UTF-8); made if new. */
  intern(bytes: Uint8Array, start: number, end: number): NameId {
    let hash = EMPTY_HASH;
    for (let i = start; i < end; i++) hash = hashStep(hash, bytes[i]!);
    return this.internHashed(bytes, start, end, hash);
  }

  /** Does what `intern` does, where the `hashStep` of all bytes has been taken already. */
  internHashed(bytes: Uint8Array, start: number, end: number, hash: number): NameId {
    const slots = this.#slots;
    const mask = slots.length / 2 - 1;
    let slot = slotOf(hash, mask);
    for (;;) {
      const id = slots[2 * slot]!;
      if (id < 0) break;
      if (slots[2 * slot + 1] === hash && this.texts.equals(id, bytes, start, end)) return id;
      slot = (slot + 1) & mask;
    }
    const id = this.texts.add(bytes, start, end);
    slots[2 * slot] = id;
    slots[2 * slot + 1] = hash;
    if (this.count * 4 > slots.length) this.#rehash();
    return id;
  }

  /** The id of a name given as a string; made if new. */
  internText(text: string): NameId {
    const bytes = new TextEncoder().encode(text);
    return this.intern(bytes, 0, bytes.length);
  }

  /** The name behind an id. */
  text(id: NameId): string {
    return this.texts.text(id);
  }

  #rehash(): void {
    const old = this.#slots;
    const slots = new Int32Array(old.length * 2).fill(-1);
    const mask = slots.length / 2 - 1;
    for (let i = 0; i < old.length; i += 2) {
      if (old[i]! < 0) continue;
      let slot = slotOf(old[i + 1]!, mask);
      while (slots[2 * slot]! >= 0) slot = (slot + 1) & mask;
      slots[2 * slot] = old[i]!;
      slots[2 * slot + 1] = old[i + 1]!;
    }
    this.#slots = slots;
  }
}

function slotOf(hash: number, mask: number): number {
  return (hash ^ (hash >>> 15)) & mask;
}
