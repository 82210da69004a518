import type { RowLayout } from './layout.js';
import { skippedState } from './randomSkip.js';

const MASK64 = (1n << 64n) - 1n;

/**
 * The generator behind `--random` and random power-up: the same bits on every engine and machine.
 *
 * xoshiro128++ (D. Blackman, S. Vigna, "Scrambled linear pseudorandom number generators", ACM
 * Trans. Math. Softw. 47(4), 2021). Its four words are the low and high halves of two outputs of
 * SplitMix64 (G. Steele, D. Lea, C. Flood, OOPSLA 2014) started at the seed.
 */
export class RandomBits {
  readonly #state = new Uint32Array(4);

  /** The seed is taken modulo 2^64. Throws RangeError for a number that is no safe integer. */
  constructor(seed: number | bigint) {
    let x = seedOf(seed);
    for (let i = 0; i < 4; i += 2) {
      x = (x + 0x9e3779b97f4a7c15n) & MASK64;
      const word = splitMix(x);
      this.#state[i] = Number(word & 0xffffffffn);
      this.#state[i + 1] = Number(word >> 32n);
    }
  }

  /** The next 32 bits, as an unsigned number. */
  next(): number {
    const one = new Uint32Array(1);
    this.fill(one, 0, 1);
    return one[0]!;
  }

  /** Draws `count` words into `target` from `start` on. */
  fill(target: Uint32Array, start: number, count: number): void {
    // The state lives in locals inside the loop: half the time a word of the stored form.
    const state = this.#state;
    let a = state[0]! | 0;
    let b = state[1]! | 0;
    let c = state[2]! | 0;
    let d = state[3]! | 0;
    for (let i = start, end = start + count; i < end; i++) {
      const sum = (a + d) | 0;
      target[i] = ((sum << 7) | (sum >>> 25)) + a;
      const shifted = b << 9;
      c ^= a;
      d ^= b;
      b ^= c;
      a ^= d;
      c ^= shifted;
      d = (d << 11) | (d >>> 21);
    }
    state[0] = a;
    state[1] = b;
    state[2] = c;
    state[3] = d;
  }

  /** Passes over `count` words, in about 20 ms at most. Throws RangeError for what is no count. */
  skip(count: bigint): void {
    if (count < 0n) throw new RangeError(`expected a count of words, got ${count}`);
    this.#state.set(skippedState(this.#state, count));
  }

  /** The four words from which `restore` goes on. */
  save(): Uint32Array {
    return this.#state.slice();
  }

  /** Goes on from saved words. Throws RangeError unless there are four, not all zero. */
  restore(words: Uint32Array): void {
    if (words.length !== 4 || words.every((word) => word === 0)) {
      throw new RangeError(`expected four words, not all 0, got [${words.join(', ')}]`);
    }
    this.#state.set(words);
  }
}

/**
 * Fills rows with fresh random bits: per row ceil(bits / 32) words in order, so that bit i of word
 * j is bit 32j + i of the row; bits beyond the last are drawn and set to 0.
 *
 * Rows stand `stride` words apart; what lies between two of them is set to 0 (nothing is x).
 */
export function fillRandomRows(
  random: RandomBits,
  layout: RowLayout,
  target: Uint32Array,
  rows: number,
  stride: number,
): void {
  const { words, bits } = layout;
  if (stride === words) {
    random.fill(target, 0, rows * words);
  } else {
    target.fill(0, 0, rows * stride);
    for (let row = 0; row < rows; row++) random.fill(target, row * stride, words);
  }
  const rest = bits & 31;
  if (rest === 0) return;
  const mask = (1 << rest) - 1;
  for (let i = words - 1, end = rows * stride; i < end; i += stride) target[i]! &= mask;
}

/** The seed of the stream that random power-up draws from: another one than the stimulus has. */
export const powerUpSeed = (seed: number | bigint): bigint => seedOf(seed) ^ POWER_UP_MIX;

// The ASCII bytes of "power-up".
const POWER_UP_MIX = 0x706f_7765_722d_7570n;

function seedOf(seed: number | bigint): bigint {
  if (typeof seed !== 'bigint' && !Number.isSafeInteger(seed)) {
    throw new RangeError(`a seed is a safe integer or a bigint, got ${seed}`);
  }
  return BigInt(seed) & MASK64;
}

function splitMix(x: bigint): bigint {
  let z = ((x ^ (x >> 30n)) * 0xbf58476d1ce4e5b9n) & MASK64;
  z = ((z ^ (z >> 27n)) * 0x94d049bb133111ebn) & MASK64;
  return z ^ (z >> 31n);
}
