/** Index of a name in a `NameTable`; 0 is the empty name. */
export type NameId = number;

// How many bytes of names are made a string at once where names are asked for in their order, and
// how far apart two names may stand for that.
const WINDOW = 4096;
const NEAR = 256;

// Names asked for again and again are found among so many.
const CACHED = 512;

const decoder = new TextDecoder();

/** The texts of names by number, as one stretch of bytes; strings are made when asked for. */
export class NameTexts {
  #bytes: Uint8Array;
  #starts: Uint32Array;
  #count = 0;
  /** The names of a stretch of `#bytes`; it has as many characters as bytes. */
  #window = '';
  #windowStart = 0;
  #lastStart = 0;
  readonly #cachedIds = new Int32Array(CACHED).fill(-1);
  readonly #cached: string[] = new Array<string>(CACHED).fill('');

  /** Room for `expected` names of ten bytes is made at once; what is not used is never touched. */
  constructor(expected: number) {
    this.#bytes = new Uint8Array(Math.ceil(expected * 10));
    this.#starts = new Uint32Array(Math.ceil(expected) + 2);
  }

  get count(): number {
    return this.#count;
  }

  /** The names one behind another; not to be kept, as adding a name may replace them. */
  get bytes(): Uint8Array {
    return this.#bytes;
  }

  /** Where a name starts in `bytes`. */
  start(id: NameId): number {
    return this.#starts[id]!;
  }

  /** Where a name ends in `bytes`. */
  end(id: NameId): number {
    return this.#starts[id + 1]!;
  }

  /** Adds the name in `bytes[start … end-1]` (UTF-8); returns its id. */
  add(bytes: Uint8Array, start: number, end: number): NameId {
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
    return id;
  }

  /** Whether a name is the one in `bytes[start … end-1]`. */
  equals(id: NameId, bytes: Uint8Array, start: number, end: number): boolean {
    const own = this.#bytes;
    let at = this.#starts[id]!;
    if (this.#starts[id + 1]! - at !== end - start) return false;
    for (let i = start; i < end; i++) if (bytes[i] !== own[at++]) return false;
    return true;
  }

  /** The offset behind a name that stands in `bytes` at an offset; -1 if another text is there. */
  endOfText(id: NameId, bytes: Uint8Array, start: number): number {
    const own = this.#bytes;
    const end = this.#starts[id + 1]!;
    let at = start;
    for (let i = this.#starts[id]!; i < end; i++) if (own[i] !== bytes[at++]) return -1;
    return at;
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
}
