import { type NameId, NameTexts } from './nameTexts.js';

export type { NameId };

/** The hash that `intern` computes, of no bytes. */
export const EMPTY_HASH = 0x811c9dc5 | 0;

// The multiplier of FNV-1 (http://www.isthe.com/chongo/tech/comp/fnv/).
const PRIME = 0x01000193;

/**
 * What the hash of a name is multiplied by before each byte is added.
 *
 * Netlists number their names, and use those with near numbers together. So small a multiplier for
 * digits lets such names have near slots, in few lines of the cache and pages of the memory; it is
 * more than ten, so that no two numbers of a length meet, and odd, so that no bit gets lost. What
 * joins or closes an index after its number leaves them near, too.
 */
export const hashMultipliers: Int32Array = new Int32Array(256).fill(PRIME);
hashMultipliers.fill(11, 0x30, 0x3a);
hashMultipliers[0x5d] = 1; // ]
hashMultipliers[0x5f] = 13; // _

/** How full a hash table of names may be. */
const FULL = 0.75;

// Multipliers that spread the upper bits of a hash: 2^32 divided by the golden ratio (Knuth, TAOCP
// vol. 3, 6.4; from memory), and that of MurmurHash3's finalizer.
const SPREAD = 0x9e3779b1;
const TAG_SPREAD = 0x85ebca6b;

const encoder = new TextEncoder();

/**
 * Each distinct name once, as a number.
 *
 * Names are looked up by their bytes, so that reading a name that was seen before makes no string.
 */
export class NameTable {
  /** The names themselves. */
  readonly texts: NameTexts;
  /**
   * An open hash table: 0 where it is empty, else an id in the lower bits, as many as slots have, and
   * in the others some bits of the name's hash. The empty name, whose id is 0, is not in it, so that
   * pages without names are never touched.
   */
  #slots: Int32Array;
  /** So many names need a larger table. */
  #most: number;

  /** Room for `expected` names is made at once; more than that cost some copying. */
  constructor(expected = 1000) {
    const slots = 2 ** Math.ceil(Math.log2(Math.max(expected, 1000) / FULL));
    this.texts = new NameTexts(FULL * slots);
    this.texts.add(new Uint8Array(0), 0, 0);
    this.#slots = new Int32Array(slots);
    this.#most = Math.floor(FULL * slots);
  }

  get count(): number {
    return this.texts.count;
  }

  /** The id of the name in `bytes[start … end-1]` (UTF-8); made if new. */
  intern(bytes: Uint8Array, start: number, end: number): NameId {
    return this.internHashed(bytes, start, end, hashOf(bytes, start, end));
  }

  /**
   * Does what `intern` does, where the hash of the bytes has been taken already: beginning with
   * `EMPTY_HASH`, for each byte `(Math.imul(hash, hashMultipliers[byte]) + byte) | 0`.
   */
  internHashed(bytes: Uint8Array, start: number, end: number, hash: number): NameId {
    if (start === end) return 0;
    const slots = this.#slots;
    const mask = slots.length - 1;
    const tag = tagOf(hash, mask);
    let slot = hash & mask;
    for (let entry = slots[slot]!; entry !== 0; entry = slots[slot]!) {
      const id = entry & mask;
      if ((entry & ~mask) === tag && this.texts.equals(id, bytes, start, end)) return id;
      slot = nextSlot(hash, slot, mask);
    }
    const id = this.texts.add(bytes, start, end);
    slots[slot] = id | tag;
    if (this.count > this.#most) this.#grow();
    return id;
  }

  /** The id of a name given as a string; made if new. */
  internText(text: string): NameId {
    const bytes = encoder.encode(text);
    return this.intern(bytes, 0, bytes.length);
  }

  /** The name behind an id. */
  text(id: NameId): string {
    return this.texts.text(id);
  }

  #grow(): void {
    const slots = new Int32Array(this.#slots.length * 2);
    const mask = slots.length - 1;
    const { texts } = this;
    for (let id = 1; id < texts.count; id++) {
      const hash = hashOf(texts.bytes, texts.start(id), texts.end(id));
      let slot = hash & mask;
      while (slots[slot] !== 0) slot = nextSlot(hash, slot, mask);
      slots[slot] = id | tagOf(hash, mask);
    }
    this.#slots = slots;
    this.#most = Math.floor(FULL * slots.length);
  }
}

function hashOf(bytes: Uint8Array, start: number, end: number): number {
  let hash = EMPTY_HASH;
  for (let i = start; i < end; i++) {
    const byte = bytes[i]!;
    hash = (Math.imul(hash, hashMultipliers[byte]!) + byte) | 0;
  }
  return hash;
}

// Far off, as near slots are taken by whole runs of numbered names; but equally far for those that
// stood together.
function nextSlot(hash: number, slot: number, mask: number): number {
  return (slot + ((Math.imul(hash >>> 10, SPREAD) >>> 8) | 1)) & mask;
}

function tagOf(hash: number, mask: number): number {
  return Math.imul(hash, TAG_SPREAD) & ~mask;
}
