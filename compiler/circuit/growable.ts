import { giveBack, numberList, SHORT, spareList } from './numberLists.js';

const LONG = 4096;

const noNumbers = new Uint32Array(0);
const noBytes = new Uint8Array(0);

// So many entries are copied at once, since that has a cost of its own. V8 also compiles a loop
// that runs for long by itself, and falls out of that code at each later call of its function.
const MANY = 256;

/** A list of unsigned 32-bit numbers that grows in place: four bytes an entry, no objects. */
export class GrowableUint32 {
  // Many lists stay empty, so that there is no room before something is pushed.
  #data: Uint32Array = noNumbers;
  #length = 0;
  readonly #capacity: number;

  constructor(capacity = 64) {
    this.#capacity = capacity;
  }

  get length(): number {
    return this.#length;
  }

  push(value: number): void {
    if (this.#length === this.#data.length) this.#grow(this.#length + 1);
    this.#data[this.#length++] = value;
  }

  get(index: number): number {
    return this.#data[index]!;
  }

  set(index: number, value: number): void {
    this.#data[index] = value;
  }

  /** Makes room for so many entries at once, which saves copying where they are known to come. */
  reserve(capacity: number): void {
    const { length } = this.#data;
    // Never by little: it may be called for one batch after another.
    if (capacity > length) this.#resize(Math.max(capacity, Math.ceil(1.25 * length)));
  }

  /** Appends two entries. */
  pushTwo(first: number, second: number): void {
    const at = this.#length;
    if (at + 2 > this.#data.length) this.#grow(at + 2);
    const data = this.#data;
    data[at] = first;
    data[at + 1] = second;
    this.#length = at + 2;
  }

  /** Appends three entries. */
  pushThree(first: number, second: number, third: number): void {
    const at = this.#length;
    if (at + 3 > this.#data.length) this.#grow(at + 3);
    const data = this.#data;
    data[at] = first;
    data[at + 1] = second;
    data[at + 2] = third;
    this.#length = at + 3;
  }

  /** Appends four entries. */
  pushFour(first: number, second: number, third: number, fourth: number): void {
    const at = this.#length;
    if (at + 4 > this.#data.length) this.#grow(at + 4);
    const data = this.#data;
    data[at] = first;
    data[at + 1] = second;
    data[at + 2] = third;
    data[at + 3] = fourth;
    this.#length = at + 4;
  }

  /** Appends `count` entries of one value. */
  extend(count: number, value: number): void {
    const end = this.#length + count;
    if (end > this.#data.length) this.#grow(end);
    const data = this.#data;
    if (count > MANY) data.fill(value, this.#length, end);
    else for (let at = this.#length; at < end; at++) data[at] = value;
    this.#length = end;
  }

  /** Appends the first `count` entries of a list. */
  append(values: ArrayLike<number>, count: number): void {
    const end = this.#length + count;
    if (end > this.#data.length) this.#grow(end);
    const data = this.#data;
    if (count > MANY && values instanceof Uint32Array) {
      data.set(values.subarray(0, count), this.#length);
    } else for (let i = 0, to = this.#length; i < count; i++) data[to++] = values[i]!;
    this.#length = end;
  }

  /** Forgets all but the first `length` entries. */
  cut(length: number): void {
    this.#length = length;
  }

  /** Appends the entries of a list that stand at certain places. */
  appendFrom(values: Uint32Array, places: Uint32Array): void {
    const count = places.length;
    if (count > MANY) {
      this.append(selected(values, places), count);
      return;
    }
    const end = this.#length + count;
    if (end > this.#data.length) this.#grow(end);
    const data = this.#data;
    for (let i = 0, to = this.#length; i < count; i++) data[to++] = values[places[i]!]!;
    this.#length = end;
  }

  /** Forgets all entries, and the room of a list that had become long. */
  clear(): void {
    if (this.#data.length > LONG) this.#data = noNumbers;
    this.#length = 0;
  }

  /** Lets other lists use the memory of this one, which becomes empty; see `spareList`. */
  release(): void {
    spareList(this.#data);
    this.#data = noNumbers;
    this.#length = 0;
  }

  /** The entries so far, as an array of just that length; the list must not be used afterwards. */
  take(): Uint32Array {
    return fitting(this.#data, this.#length) as Uint32Array;
  }

  #grow(needed: number): void {
    const { length } = this.#data;
    this.#resize(Math.max(needed, length === 0 ? this.#capacity : 2 * length));
  }

  #resize(capacity: number): void {
    const old = this.#data;
    const larger = numberList(capacity);
    if (this.#length > MANY) larger.set(old.subarray(0, this.#length));
    else for (let i = 0; i < this.#length; i++) larger[i] = old[i]!;
    this.#data = larger;
    giveBack(old);
  }
}

// Of its own, as a closure costs its function something at each call, also where it is not made.
const selected = (values: Uint32Array, places: Uint32Array): Uint32Array =>
  places.map((place) => values[place]!);

/** The byte-sized sister of `GrowableUint32`. */
export class GrowableUint8 {
  #data: Uint8Array = noBytes;
  #length = 0;
  readonly #capacity: number;

  constructor(capacity = 64) {
    this.#capacity = capacity;
  }

  get length(): number {
    return this.#length;
  }

  push(value: number): void {
    if (this.#length === this.#data.length) {
      this.reserve(Math.max(this.#data.length * 2, this.#capacity, 1));
    }
    this.#data[this.#length++] = value;
  }

  /** As for `GrowableUint32`. */
  reserve(capacity: number): void {
    const { length } = this.#data;
    if (capacity <= length) return;
    const larger = new Uint8Array(Math.max(capacity, Math.ceil(1.25 * length)));
    larger.set(this.#data);
    this.#data = larger;
  }

  get(index: number): number {
    return this.#data[index]!;
  }

  set(index: number, value: number): void {
    this.#data[index] = value;
  }

  /** As for `GrowableUint32`. */
  take(): Uint8Array {
    return fitting(this.#data, this.#length) as Uint8Array;
  }
}

const ESCAPE = 255;

/** A list of numbers of which by far the most are below 255: a byte for each of these. */
export class GrowableSmall {
  readonly #bytes: GrowableUint8;
  #others: Map<number, number> | undefined;

  constructor(capacity?: number) {
    this.#bytes = new GrowableUint8(capacity);
  }

  push(value: number): void {
    if (value < ESCAPE) this.#bytes.push(value);
    else this.#pushOther(value);
  }

  get(index: number): number {
    const byte = this.#bytes.get(index);
    return byte < ESCAPE ? byte : this.#others!.get(index)!;
  }

  set(index: number, value: number): void {
    this.#bytes.set(index, Math.min(value, ESCAPE));
    if (value >= ESCAPE) this.#setOther(index, value);
  }

  /** The entries so far, which must be below 2^16. */
  toUint16(): Uint16Array {
    const list = new Uint16Array(this.#bytes.take());
    for (const [index, value] of this.#others ?? [])
      if (list[index] === ESCAPE) list[index] = value;
    return list;
  }

  #pushOther(value: number): void {
    this.#setOther(this.#bytes.length, value);
    this.#bytes.push(ESCAPE);
  }

  #setOther(index: number, value: number): void {
    this.#others ??= new Map();
    this.#others.set(index, value);
  }
}

// A copy takes time and, until the old list is gone, twice the memory; some unused room is cheaper.
// That of a short list is part of a page.
function fitting(data: Uint32Array | Uint8Array, length: number): Uint32Array | Uint8Array {
  const isShort = data.length <= SHORT;
  return !isShort && length * 4 >= data.length * 3
    ? data.subarray(0, length)
    : data.slice(0, length);
}
