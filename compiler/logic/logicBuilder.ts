import { GrowableUint8, GrowableUint32 } from '../circuit/growable.js';
import { FALSE, type Literal, LogicOp, TRUE } from './logic.js';

/** Which simplifications a `LogicBuilder` makes; all by default. Off only for measurements. */
export interface LogicOptions {
  /** Equal nodes are made once (structural hashing). */
  readonly share?: boolean | undefined;
  /** Constants, equal and opposite operands, absorption. */
  readonly fold?: boolean | undefined;
  /** Exclusive-ors and multiplexers are recognised in and/or form. */
  readonly recover?: boolean | undefined;
}

/**
 * Builds a logic graph bottom up and simplifies each node as it is made.
 *
 * Inversions are part of the literals, so that single-input gates, inverter chains and De Morgan
 * pairs vanish here. Structural hashing after Kuehlmann, Paruthi, Krohm, Ganai: "Robust Boolean
 * reasoning for equivalence checking and functional property verification", IEEE TCAD 21(12), 2002.
 */
export class LogicBuilder {
  readonly #op = new GrowableUint8(1024);
  readonly #a = new GrowableUint32(1024);
  readonly #b = new GrowableUint32(1024);
  readonly #c = new GrowableUint32(1024);
  #slots = new Int32Array(4096).fill(-1);
  readonly #share: boolean;
  readonly #fold: boolean;
  readonly #recover: boolean;

  constructor({ share = true, fold = true, recover = true }: LogicOptions = {}) {
    this.#share = share;
    this.#fold = fold;
    this.#recover = recover;
    this.#append(LogicOp.Zero, 0, 0, 0);
  }

  get nodeCount(): number {
    return this.#op.length;
  }

  op(node: number): number {
    return this.#op.get(node);
  }

  /** Operand literal a, b or c of a node. */
  operand(node: number, which: 0 | 1 | 2): Literal {
    return (which === 0 ? this.#a : which === 1 ? this.#b : this.#c).get(node);
  }

  input(index: number): Literal {
    return this.#node(LogicOp.Input, index, 0, 0);
  }

  state(index: number): Literal {
    return this.#node(LogicOp.State, index, 0, 0);
  }

  not(a: Literal): Literal {
    return a ^ 1;
  }

  and(a: Literal, b: Literal): Literal {
    const folded = this.#fold ? this.#foldAnd(a, b) : -1;
    if (folded >= 0) return folded;
    return a < b ? this.#node(LogicOp.And, a, b, 0) : this.#node(LogicOp.And, b, a, 0);
  }

  or(a: Literal, b: Literal): Literal {
    return this.and(a ^ 1, b ^ 1) ^ 1;
  }

  xor(a: Literal, b: Literal): Literal {
    // Inversions of the operands move to the result, so that all four forms share one node.
    const inverted = (a ^ b) & 1;
    const p = a & ~1;
    const q = b & ~1;
    if (this.#fold) {
      if (p === q) return inverted;
      if (p === FALSE) return q ^ inverted;
      if (q === FALSE) return p ^ inverted;
    }
    const node = p < q ? this.#node(LogicOp.Xor, p, q, 0) : this.#node(LogicOp.Xor, q, p, 0);
    return node ^ inverted;
  }

  /** `select ? one : zero`. */
  mux(select: Literal, zero: Literal, one: Literal): Literal {
    if ((select & 1) === 1) return this.mux(select ^ 1, one, zero);
    if (this.#fold) {
      const folded = this.#foldMux(select, zero, one);
      if (folded >= 0) return folded;
    }
    // Both data operands inverted is the same node inverted; the 0-operand is kept plain.
    const inverted = zero & 1;
    return this.#node(LogicOp.Mux, select, zero ^ inverted, one ^ inverted) ^ inverted;
  }

  /** The number that bits make, the first one lowest; see `LogicOp.Pack`. */
  pack(bits: readonly Literal[]): Literal {
    return bits.reduceRight((number, bit) => this.longer(bit, number), FALSE);
  }

  /** A number with one more bit, which becomes the lowest one; see `LogicOp.Pack`. */
  longer(bit: Literal, number: Literal): Literal {
    return number === FALSE && bit === FALSE ? FALSE : this.#node(LogicOp.Pack, bit, number, 0);
  }

  /** A word of a memory, for `bit`; see `LogicOp.Load`. */
  load(memory: number, address: Literal, valid: Literal): Literal {
    return this.#node(LogicOp.Load, address, valid, memory);
  }

  /** A bit of a word; see `LogicOp.Bit`. */
  bit(word: Literal, bit: number): Literal {
    return this.#node(LogicOp.Bit, word, FALSE, bit);
  }

  /** The columns of the graph so far. */
  take(): { op: Uint8Array; a: Uint32Array; b: Uint32Array; c: Uint32Array } {
    return { op: this.#op.take(), a: this.#a.take(), b: this.#b.take(), c: this.#c.take() };
  }

  #foldMux(select: Literal, zero: Literal, one: Literal): Literal {
    if (select === FALSE) return zero;
    if (zero === one) return zero;
    if (zero === (one ^ 1)) return this.xor(select, zero);
    if (one === TRUE || one === select) return this.or(select, zero);
    if (one === FALSE || one === (select ^ 1)) return this.and(select ^ 1, zero);
    if (zero === FALSE || zero === select) return this.and(select, one);
    if (zero === TRUE || zero === (select ^ 1)) return this.or(select ^ 1, one);
    return -1;
  }

  #foldAnd(a: Literal, b: Literal): Literal {
    if (a === FALSE || b === FALSE || a === (b ^ 1)) return FALSE;
    if (a === TRUE || a === b) return b;
    if (b === TRUE) return a;
    const absorbed = this.#absorb(a, b);
    if (absorbed >= 0) return absorbed;
    const reversed = this.#absorb(b, a);
    if (reversed >= 0) return reversed;
    return this.#recover && (a & b & 1) === 1 ? this.#recoverFrom(a >>> 1, b >>> 1) : -1;
  }

  // a & (a & q) = a & q;  a & (~a & q) = 0;  a & ~(a & q) = a & ~q;  a & ~(~a & q) = a
  #absorb(a: Literal, b: Literal): Literal {
    const node = b >>> 1;
    if (this.#op.get(node) !== LogicOp.And) return -1;
    const p = this.#a.get(node);
    const q = this.#b.get(node);
    if ((b & 1) === 0) {
      if (p === a || q === a) return b;
      return p === (a ^ 1) || q === (a ^ 1) ? FALSE : -1;
    }
    if (p === (a ^ 1) || q === (a ^ 1)) return a;
    if (p === a) return this.and(a, q ^ 1);
    return q === a ? this.and(a, p ^ 1) : -1;
  }

  // ~(s & t) & ~(~s & e) is the inverse of the multiplexer s ? t : e, and an exclusive-or where
  // t and e are opposite, which `mux` finds.
  #recoverFrom(left: number, right: number): Literal {
    if (this.#op.get(left) !== LogicOp.And || this.#op.get(right) !== LogicOp.And) return -1;
    const p = this.#a.get(left);
    const q = this.#b.get(left);
    const r = this.#a.get(right);
    const s = this.#b.get(right);
    if (p === (r ^ 1)) return this.mux(p, s, q) ^ 1;
    if (p === (s ^ 1)) return this.mux(p, r, q) ^ 1;
    if (q === (r ^ 1)) return this.mux(q, s, p) ^ 1;
    if (q === (s ^ 1)) return this.mux(q, r, p) ^ 1;
    return -1;
  }

  #node(op: number, a: number, b: number, c: number): Literal {
    if (!this.#share && op > LogicOp.State) return this.#append(op, a, b, c) * 2;
    const mask = this.#slots.length - 1;
    let slot = hash(op, a, b, c) & mask;
    for (;;) {
      const node = this.#slots[slot]!;
      if (node < 0) break;
      if (
        this.#a.get(node) === a &&
        this.#b.get(node) === b &&
        this.#c.get(node) === c &&
        this.#op.get(node) === op
      ) {
        return node * 2;
      }
      slot = (slot + 1) & mask;
    }
    const node = this.#append(op, a, b, c);
    this.#slots[slot] = node;
    if (this.#op.length * 2 > this.#slots.length) this.#rehash();
    return node * 2;
  }

  #append(op: number, a: number, b: number, c: number): number {
    this.#op.push(op);
    this.#a.push(a);
    this.#b.push(b);
    this.#c.push(c);
    return this.#op.length - 1;
  }

  #rehash(): void {
    const slots = new Int32Array(this.#slots.length * 2).fill(-1);
    const mask = slots.length - 1;
    for (let node = 0; node < this.#op.length; node++) {
      let slot =
        hash(this.#op.get(node), this.#a.get(node), this.#b.get(node), this.#c.get(node)) & mask;
      while (slots[slot]! >= 0) slot = (slot + 1) & mask;
      slots[slot] = node;
    }
    this.#slots = slots;
  }
}

function hash(op: number, a: number, b: number, c: number): number {
  let h = Math.imul(a, 0x9e3779b1) ^ Math.imul(b, 0x85ebca6b) ^ Math.imul(c, 0xc2b2ae35) ^ op;
  h ^= h >>> 15;
  h = Math.imul(h, 0x27d4eb2f);
  return (h ^ (h >>> 13)) >>> 0;
}
