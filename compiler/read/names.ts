/** Index of a name in a `NameTable`; 0 is the empty name. */
export type NameId = number;

/** The hash that `intern` computes, of no bytes. */
export const EMPTY_HASH = 0x811c9dc5 | 0;

// FNV-1 (http://www.isthe.com/chongo/tech/comp/fnv/): as the last byte is only mixed in, names that
// differ in it, such as n10 … n19, have neighbouring slots and share a line of the cache.
const PRIME = 0x01000193;

// How many bytes of names are made a string at once where names are asked for in their order, and
// how far apart two names may stand for that.
const WINDOW = 4096;
const NEAR = 256;

// Names asked for again and again are found among so many.
const CACHED = 512;

const decoder = new TextDecoder();

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
  #bytes: Uint8Array;
  #starts: Uint32Array;
  // Pairs of an id (-1: none) and its name's hash.
  #slots: Int32Array;
  #count = 0;
  /** The names of a stretch of `#bytes`; it has as many characters as bytes. */
  #window = '';
  #windowStart = 0;
  #lastStart = 0;
  readonly #cachedIds = new Int32Array(CACHED).fill(-1);
  readonly #cached: string[] = new Array<string>(CACHED).fill('');

  /** Room for `expected` names is made at once; more than that cost some copying. */
  constructor(expected = 1000) {
    const capacity = 2 ** Math.ceil(Math.log2(Math.max(expected, 1000)));
    this.#bytes = new Uint8Array(capacity * 8);
    this.#starts = new Uint32Array(capacity);
    this.#slots = new Int32Array(capacity * 4).fill(-1);
    this.intern(new Uint8Array(0), 0, 0);
  }

  get count(): number {
    return this.#count;
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
      if (slots[2 * slot + 1] === hash && this.#equals(id, bytes, start, end)) return id;
      slot = (slot + 1) & mask;
    }
    slots[2 * slot] = this.#count;
    slots[2 * slot + 1] = hash;
    return this.#append(bytes, start, end);
  }

  /** The id of a name given as a string; made if new. */
  internText(text: string): NameId {
    const bytes = new TextEncoder().encode(text);
    return this.intern(bytes, 0, bytes.length);
  }

  /** The name behind an id. */
  text(id: NameId): string {
    const start = this.#starts[id]!;
    const end = this.#starts[id + 1]!;
    const at = start - this.#windowStart;
    if (at >= 0 && at + end - start <= this.#window.length) {
      return this.#window.slice(at, at + end - start);
    }
    const place = id % CACHED;
    if (this.#cachedIds[place] === id) return this.#cached[place]!;
    const text = this.#decoded(start, end);
    this.#cachedIds[place] = id;
    this.#cached[place] = text;
    return text;
  }

  #decoded(start: number, end: number): string {
    const bytes = this.#bytes;
    const distance = start - this.#lastStart;
    this.#lastStart = start;
    if (distance > 0 && distance < NEAR) {
      const last = Math.min(start + WINDOW, this.#starts[this.#count]!);
      const window = decoder.decode(bytes.subarray(start, last));
      // With characters beyond ASCII, places in the string are not places in the bytes.
      if (window.length === last - start && end <= last) {
        this.#window = window;
        this.#windowStart = start;
        return window.slice(0, end - start);
      }
    }
    return decoder.decode(bytes.subarray(start, end));
  }

  #equals(id: NameId, bytes: Uint8Array, start: number, end: number): boolean {
    const own = this.#bytes;
    let at = this.#starts[id]!;
    if (this.#starts[id + 1]! - at !== end - start) return false;
    for (let i = start; i < end; i++) if (bytes[i] !== own[at++]) return false;
    return true;
  }

  #append(bytes: Uint8Array, start: number, end: number): NameId {
    const id = this.#count++;
    if (id + 2 > this.#starts.length) {
      const larger = new Uint32Array(this.#starts.length * 2);
      larger.set(this.#starts);
      this.#starts = larger;
    }
    let to = this.#starts[id]!;
    if (to + end - start > this.#bytes.length) {
      const larger = new Uint8Array(Math.max(to + end - start, this.#bytes.length * 2));
      larger.set(this.#bytes);
      this.#bytes = larger;
    }
    for (let i = start; i < end; i++) this.#bytes[to++] = bytes[i]!;
    this.#starts[id + 1] = to;
    if (this.#count * 4 > this.#slots.length) this.#rehash();
    return id;
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
