import { type Logic, LogicOp } from '../../logic/logic.js';

const CYCLES = 96;

/**
 * Runs 32 sequences of random inputs side by side from one state, and gives a number per state bit
 * that is the same for bits that have always been equal, or opposite, beginning with their start;
 * 0 for a bit that has never left it.
 */
export function signaturesOf(logic: Logic, start: Uint8Array): Float64Array {
  const simulation = new Simulation(logic, start);
  const low = new Int32Array(logic.states.length);
  const high = new Int32Array(logic.states.length);
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    simulation.step();
    for (let bit = 0; bit < low.length; bit++) {
      const moved = simulation.state[bit]! ^ -start[bit]!;
      low[bit] = Math.imul(low[bit]! ^ moved, 0x9e3779b1) ^ (low[bit]! >>> 15);
      high[bit] = Math.imul(high[bit]! ^ moved, 0x85ebca6b) ^ (high[bit]! >>> 13);
    }
  }
  return Float64Array.from(low, (value, bit) => (value >>> 0) * 0x200000 + (high[bit]! & 0x1fffff));
}

class Simulation {
  /** A lane of each sequence per state bit. */
  readonly state: Int32Array;
  readonly #logic: Logic;
  readonly #value: Int32Array;
  #random = 0x2545f491;

  constructor(logic: Logic, start: Uint8Array) {
    this.#logic = logic;
    this.#value = new Int32Array(logic.nodeCount);
    this.state = Int32Array.from(start, (bit) => -bit);
  }

  step(): void {
    const { op, a, b, c, nodeCount, next } = this.#logic;
    const value = this.#value;
    for (let node = 1; node < nodeCount; node++) {
      const kind = op[node]!;
      if (kind === LogicOp.State) value[node] = this.state[a[node]!]!;
      else if (kind === LogicOp.Input) value[node] = this.#lanes();
      else {
        const p = this.#of(a[node]!);
        const q = this.#of(b[node]!);
        if (kind === LogicOp.And) value[node] = p & q;
        else if (kind === LogicOp.Xor) value[node] = p ^ q;
        else value[node] = q ^ (p & (q ^ this.#of(c[node]!)));
      }
    }
    for (let bit = 0; bit < next.length; bit++) this.state[bit] = this.#of(next[bit]!);
  }

  #of(literal: number): number {
    return this.#value[literal >>> 1]! ^ -(literal & 1);
  }

  // Marsaglia's xorshift (Journal of Statistical Software 8(14), 2003): any bits will do.
  #lanes(): number {
    let x = this.#random;
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    this.#random = x;
    return x;
  }
}
