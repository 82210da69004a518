/** Printable characters of an identifier code, and how many values that makes with "none". */
const FIRST = 0x20;
const BASE = 95;
const DIRECT_LENGTH = 3;
/** Longer ones are no exact numbers. */
const NUMBER_LENGTH = 8;

/** Finds what belongs to an identifier code, quickly, in bytes. */
export class IdTable {
  readonly #direct = new Int32Array(BASE ** DIRECT_LENGTH).fill(-1);
  readonly #others = new Map<number | string, number>();

  /** Gives the code a number from 0 on. */
  set(id: string, number: number): void {
    const bytes = new TextEncoder().encode(id);
    const key = keyOf(bytes, 0, bytes.length);
    if (typeof key === 'number' && bytes.length <= DIRECT_LENGTH) this.#direct[key] = number;
    else this.#others.set(key, number);
  }

  /** The number of the code in `bytes[start … end-1]`; -1 where it has none. */
  get(bytes: Uint8Array, start: number, end: number): number {
    const key = keyOf(bytes, start, end);
    if (end - start <= DIRECT_LENGTH) return this.#direct[key as number] ?? -1;
    return this.#others.get(key) ?? -1;
  }
}

function keyOf(bytes: Uint8Array, start: number, end: number): number | string {
  if (end - start >= NUMBER_LENGTH) return String.fromCharCode(...bytes.subarray(start, end));
  let key = 0;
  for (let at = start; at < end; at++) key = key * BASE + (bytes[at]! - FIRST);
  return key;
}
