import type { NetId } from '../../../circuit/ids.js';

/** A variable whose value is a number, and how it was assigned. */
export interface KnownWord {
  /** Its bits, the rightmost first. */
  readonly keys: readonly NetId[];
  value: bigint;
  /** Whether any assignment was other than that of a loop's index. */
  isOrdinary: boolean;
}

/**
 * Variables whose bits all are known, each as one number: loops count by the hundred thousand, for
 * which bit by bit would take far too long.
 */
export class KnownWords {
  readonly #words = new Map<NetId, KnownWord>();
  readonly #ofBit = new Map<NetId, KnownWord>();

  get isEmpty(): boolean {
    return this.#words.size === 0;
  }

  /** The word of a variable as a whole. */
  get(keys: readonly NetId[]): KnownWord | undefined {
    const word = this.#words.get(keys[0]!);
    return word?.keys.length === keys.length ? word : undefined;
  }

  /** The word that a bit belongs to. */
  ofBit(key: NetId): KnownWord | undefined {
    return this.#ofBit.get(key);
  }

  /** Adds a word; none of its bits may belong to one. */
  add(word: KnownWord): void {
    this.#words.set(word.keys[0]!, word);
    for (const key of word.keys) this.#ofBit.set(key, word);
  }

  delete(word: KnownWord): void {
    this.#words.delete(word.keys[0]!);
    for (const key of word.keys) this.#ofBit.delete(key);
  }

  /** All words, which may be deleted meanwhile. */
  all(): readonly KnownWord[] {
    return [...this.#words.values()];
  }

  clear(): void {
    if (this.isEmpty) return;
    this.#words.clear();
    this.#ofBit.clear();
  }
}
