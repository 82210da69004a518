import type { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import type { NetId } from '../../../../compiler/circuit/ids.js';

/** Nets of a value, least significant first. */
export type Bits = readonly NetId[];

/** Gates for the operators of IEEE 1364-2005 on whole words, in the most direct way. */
export class WordLogic {
  readonly #builder: CircuitBuilder;
  readonly zero: NetId;
  readonly one: NetId;

  constructor(builder: CircuitBuilder) {
    this.#builder = builder;
    this.zero = builder.gate(GateKind.Zero, []);
    this.one = builder.gate(GateKind.One, []);
  }

  gate(kind: GateKind, inputs: Bits): NetId {
    return this.#builder.gate(kind, inputs);
  }

  constant(value: number, width: number): Bits {
    return Array.from({ length: width }, (_, i) => ((value >> i) & 1 ? this.one : this.zero));
  }

  not(a: Bits): Bits {
    return a.map((net) => this.gate(GateKind.Not, [net]));
  }

  each(kind: GateKind, a: Bits, b: Bits): Bits {
    return a.map((net, i) => this.gate(kind, [net, b[i]!]));
  }

  /** `select` chooses `one`, else `zero`. */
  mux(select: NetId, one: Bits, zero: Bits): Bits {
    return one.map((net, i) => this.gate(GateKind.Mux, [select, zero[i]!, net]));
  }

  /** The sum of two words and a carry, and the carry out of it. */
  add(a: Bits, b: Bits, carry: NetId): { readonly sum: Bits; readonly carry: NetId } {
    let next = carry;
    const sum = a.map((net, i) => {
      const inputs = [net, b[i]!, next];
      const out = this.gate(GateKind.Xor, inputs);
      const pairs = [
        [0, 1],
        [0, 2],
        [1, 2],
      ].map((pair) =>
        this.gate(
          GateKind.And,
          pair.map((p) => inputs[p]!),
        ),
      );
      next = this.gate(GateKind.Or, pairs);
      return out;
    });
    return { sum, carry: next };
  }

  subtract(a: Bits, b: Bits): Bits {
    return this.add(a, this.not(b), this.one).sum;
  }

  less(a: Bits, b: Bits): NetId {
    return this.not([this.add(a, this.not(b), this.one).carry])[0]!;
  }

  multiply(a: Bits, b: Bits): Bits {
    let sum = this.constant(0, a.length);
    for (const [i, net] of b.entries()) {
      const shifted = [...this.constant(0, i), ...a].slice(0, a.length);
      const row = shifted.map((bit) => this.gate(GateKind.And, [bit, net]));
      sum = this.add(sum, row, this.zero).sum;
    }
    return sum;
  }

  /** Whole-number division by shifting and subtracting; the divisor must not be 0. */
  divide(a: Bits, b: Bits): { readonly quotient: Bits; readonly remainder: Bits } {
    const divisor = [...b, this.zero];
    let rest = this.constant(0, divisor.length);
    const quotient: NetId[] = [];
    for (const net of a.toReversed()) {
      rest = [net, ...rest.slice(0, -1)];
      const isSmaller = this.less(rest, divisor);
      rest = this.mux(isSmaller, rest, this.subtract(rest, divisor));
      quotient.unshift(this.gate(GateKind.Not, [isSmaller]));
    }
    return { quotient, remainder: rest.slice(0, b.length) };
  }

  /** Shifts by a variable amount; `fill` comes in. */
  shift(a: Bits, amount: Bits, isLeft: boolean, fill: NetId): Bits {
    let result = a;
    for (const [i, net] of amount.entries()) {
      const by = Math.min(2 ** i, a.length);
      const filled = new Array<NetId>(by).fill(fill);
      const moved = isLeft
        ? [...filled, ...result].slice(0, a.length)
        : [...result, ...filled].slice(-a.length);
      result = this.mux(net, moved, result);
    }
    return result;
  }

  /** The bit of `a` with a number; there are as many as the number can tell. */
  bitOf(a: Bits, index: Bits): NetId {
    if (index.length === 0) return a[0]!;
    const half = a.length / 2;
    const rest = index.slice(0, -1);
    const [low, high] = [this.bitOf(a.slice(0, half), rest), this.bitOf(a.slice(half), rest)];
    return this.gate(GateKind.Mux, [index.at(-1)!, low, high]);
  }
}
