import { type Logic, LogicOp } from './logic.js';

/**
 * Evaluates a logic graph for 32 trials side by side, a bit of each number for each: `value` takes
 * what every node is. `leaf` gives the values of inputs, state bits and bits of memories; it is
 * asked for other nodes of memories too, whose values nothing reads.
 */
export function simulate(logic: Logic, value: Int32Array, leaf: (node: number) => number): void {
  const { op, a, b, c, nodeCount } = logic;
  const of = (literal: number): number => value[literal >>> 1]! ^ -(literal & 1);
  for (let node = 1; node < nodeCount; node++) {
    const kind = op[node]!;
    if (kind < LogicOp.And || kind > LogicOp.Mux) {
      value[node] = leaf(node);
      continue;
    }
    const p = of(a[node]!);
    const q = of(b[node]!);
    if (kind === LogicOp.And) value[node] = p & q;
    else if (kind === LogicOp.Xor) value[node] = p ^ q;
    else value[node] = q ^ (p & (q ^ of(c[node]!)));
  }
}

/**
 * Random words, the same for every call of the function. Any bits will do: they are those of
 * Marsaglia's xorshift (Journal of Statistical Software 8(14), 2003).
 */
export function randomWords(): () => number {
  let x = 0x2545f491;
  return () => {
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    return x;
  };
}

/** Numbers that are the same for rows of words that are the same, row by row. */
export class Signatures {
  readonly #low: Int32Array;
  readonly #high: Int32Array;

  constructor(count: number) {
    this.#low = new Int32Array(count);
    this.#high = new Int32Array(count);
  }

  /** Adds a word to a row. */
  add(row: number, word: number): void {
    const [low, high] = [this.#low[row]!, this.#high[row]!];
    this.#low[row] = Math.imul(low ^ word, 0x9e3779b1) ^ (low >>> 15);
    this.#high[row] = Math.imul(high ^ word, 0x85ebca6b) ^ (high >>> 13);
  }

  /** The number of each row; 0 for a row of zeros. */
  take(): Float64Array {
    return Float64Array.from(
      this.#low,
      (low, row) => (low >>> 0) * 0x200000 + (this.#high[row]! & 0x1fffff),
    );
  }
}
