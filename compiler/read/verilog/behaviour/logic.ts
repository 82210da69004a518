import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import { type Value, X } from '../../../circuit/values.js';
import type { GateSink } from '../scope.js';

/** The nets of a value, least significant bit first. */
export type Bits = readonly NetId[];

/**
 * Makes gates for one process or expression: folds constants, and makes each gate only once.
 *
 * What is folded keeps the three-valued meaning of the gate tables; `a ^ a` stays a gate, because
 * it is x while a is x.
 */
export class Logic {
  readonly sink: GateSink;
  readonly #constants: (NetId | undefined)[] = [];
  readonly #made = new Map<string, NetId>();
  readonly #inverse = new Map<NetId, NetId>();

  constructor(sink: GateSink) {
    this.sink = sink;
  }

  /** Forgets the gates made, but for constants: the next ones are made anew. */
  clear(): void {
    this.#made.clear();
    this.#inverse.clear();
  }

  get zero(): NetId {
    return this.constant(0);
  }

  get one(): NetId {
    return this.constant(1);
  }

  get unknown(): NetId {
    return this.constant(X);
  }

  /** The net of a constant bit. */
  constant(value: Value): NetId {
    let net = this.#constants[value];
    if (net === undefined) {
      const kinds = [GateKind.Zero, GateKind.One, GateKind.Unknown] as const;
      net = this.sink.gate(kinds[value]!, []);
      this.#constants[value] = net;
    }
    return net;
  }

  /** The value of a net that a constant drives, undefined for any other. */
  valueOf(net: NetId): Value | undefined {
    switch (this.sink.kindOf(net)) {
      case GateKind.Zero:
        return 0;
      case GateKind.One:
        return 1;
      case GateKind.Unknown:
        return X;
      default:
        return undefined;
    }
  }

  not(a: NetId): NetId {
    const value = this.valueOf(a);
    if (value !== undefined) return this.constant(value === X ? X : value === 0 ? 1 : 0);
    let inverse = this.#inverse.get(a);
    if (inverse === undefined) {
      inverse = this.sink.gate(GateKind.Not, [a]);
      this.#inverse.set(a, inverse);
      this.#inverse.set(inverse, a);
    }
    return inverse;
  }

  and(...inputs: Bits): NetId {
    return this.#dominated(GateKind.And, inputs, 0);
  }

  or(...inputs: Bits): NetId {
    return this.#dominated(GateKind.Or, inputs, 1);
  }

  xor(...inputs: Bits): NetId {
    let odd = false;
    const rest: NetId[] = [];
    for (const net of inputs) {
      const value = this.valueOf(net);
      if (value === X) return this.unknown;
      if (value === undefined) rest.push(net);
      else if (value === 1) odd = !odd;
    }
    if (rest.length === 0) return this.constant(odd ? 1 : 0);
    if (rest.length === 1) return odd ? this.not(rest[0]!) : rest[0]!;
    return this.#gate(odd ? GateKind.Xnor : GateKind.Xor, rest.sort(ascending));
  }

  xnor(a: NetId, b: NetId): NetId {
    return this.xor(a, b, this.one);
  }

  /** `whenOne` where `select` is 1, `whenZero` where it is 0. */
  mux(select: NetId, whenZero: NetId, whenOne: NetId): NetId {
    if (whenZero === whenOne) return whenZero;
    const chosen = this.valueOf(select);
    if (chosen === 0) return whenZero;
    if (chosen === 1) return whenOne;
    const zero = this.valueOf(whenZero);
    const one = this.valueOf(whenOne);
    if (zero !== undefined && zero === one) return whenZero;
    if (chosen === X && zero !== undefined && one !== undefined) return this.unknown;
    if (zero === 0) return this.and(select, whenOne);
    if (one === 1) return this.or(select, whenZero);
    if (one === 0) return this.and(this.not(select), whenZero);
    if (zero === 1) return this.or(this.not(select), whenOne);
    return this.#gate(GateKind.Mux, [select, whenZero, whenOne]);
  }

  // And with its dominating 0, or with its dominating 1.
  #dominated(kind: GateKind, inputs: Bits, dominating: 0 | 1): NetId {
    const rest = new Set<NetId>();
    let unknown = false;
    for (const net of inputs) {
      const value = this.valueOf(net);
      if (value === dominating) return net;
      if (value === undefined) rest.add(net);
      else if (value === X) unknown = true;
    }
    if (unknown) rest.add(this.unknown);
    const nets = [...rest];
    if (nets.length === 0) return this.constant(dominating === 0 ? 1 : 0);
    if (nets.length === 1) return nets[0]!;
    return this.#gate(kind, nets.sort(ascending));
  }

  #gate(kind: GateKind, inputs: Bits): NetId {
    const key = `${kind},${inputs.join()}`;
    let net = this.#made.get(key);
    if (net === undefined) {
      net = this.sink.gate(kind, inputs);
      this.#made.set(key, net);
    }
    return net;
  }
}

function ascending(a: number, b: number): number {
  return a - b;
}
