import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import { type Value, X } from '../../../circuit/values.js';
import type { Budget } from '../budget.js';
import type { GateSink } from '../scope.js';
import { GateTable, NO_GATE } from './gateTable.js';

const STEPS_OF_GATE = 3;

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
  readonly #budget: Budget | undefined;
  readonly #constants: (NetId | undefined)[] = [];
  // Constants need none.
  #made: GateTable | undefined;

  /** `budget` is charged for the gates made. */
  constructor(sink: GateSink, budget?: Budget) {
    this.sink = sink;
    this.#budget = budget;
  }

  /** Forgets the gates made, but for constants: the next ones are made anew. */
  clear(): void {
    this.#made?.clear();
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
    this.#made ??= new GateTable();
    const known = this.#made.find(GateKind.Not, [a]);
    if (known !== NO_GATE) return known;
    const inverse = this.sink.gate(GateKind.Not, [a]);
    this.#made.add(GateKind.Not, [a], inverse);
    this.#made.add(GateKind.Not, [inverse], a);
    return inverse;
  }

  and(...inputs: Bits): NetId {
    return this.all(inputs);
  }

  or(...inputs: Bits): NetId {
    return this.any(inputs);
  }

  xor(...inputs: Bits): NetId {
    return this.parity(inputs);
  }

  /** Whether all of some bits are 1. */
  all(inputs: Bits): NetId {
    return this.#dominated(GateKind.And, inputs, 0);
  }

  /** Whether any of some bits is 1. */
  any(inputs: Bits): NetId {
    return this.#dominated(GateKind.Or, inputs, 1);
  }

  /** Whether an odd number of some bits is 1, or an even one where `isEven` is set. */
  parity(inputs: Bits, isEven = false): NetId {
    let odd = isEven;
    const rest: NetId[] = [];
    for (const net of inputs) {
      const value = this.valueOf(net);
      if (value === X) return this.unknown;
      if (value === undefined) rest.push(net);
      else if (value === 1) odd = !odd;
    }
    if (rest.length === 0) return this.constant(odd ? 1 : 0);
    if (rest.length === 1) return odd ? this.not(rest[0]!) : rest[0]!;
    return this.#gate(odd ? GateKind.Xnor : GateKind.Xor, sorted(rest));
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

  /** Whether gates only look at a circuit; see `GateSink.looksAt`. */
  get isLooking(): boolean {
    return this.sink.looksAt !== undefined;
  }

  /** Whether two bits are the same, x as a value of its own; only for logic that is looking. */
  same(a: NetId, b: NetId): NetId {
    if (a === b) return this.one;
    const [first, second] = [this.valueOf(a), this.valueOf(b)];
    if (first !== undefined && second !== undefined) return this.constant(first === second ? 1 : 0);
    if (this.sink.looksAt === 'threeValues') return this.#gate(GateKind.CaseEqual, sorted([a, b]));
    return first === X || second === X ? this.zero : this.xnor(a, b);
  }

  /**
   * A result that is x in all its bits where any bit of the operands is x (clause 5.1.5); as it is
   * where logic is part of a circuit, whose gates may know more.
   */
  strictly(result: Bits, ...operands: readonly Bits[]): Bits {
    if (this.sink.looksAt !== 'threeValues') return result;
    // a ^ a is 0, and x where a is.
    const open = operands.flat().filter((net) => this.valueOf(net) === undefined);
    if (open.length === 0) return result;
    const poison = this.any(open.map((net) => this.xor(net, net)));
    return result.map((net) => this.xor(net, poison));
  }

  // And with its dominating 0, or with its dominating 1.
  #dominated(kind: GateKind, inputs: Bits, dominating: 0 | 1): NetId {
    const rest: NetId[] = [];
    let unknown = false;
    for (const net of inputs) {
      const value = this.valueOf(net);
      if (value === dominating) return net;
      if (value === undefined) rest.push(net);
      else if (value === X) unknown = true;
    }
    if (unknown) rest.push(this.unknown);
    const nets = distinct(sorted(rest));
    if (nets.length === 0) return this.constant(dominating === 0 ? 1 : 0);
    if (nets.length === 1) return nets[0]!;
    return this.#gate(kind, nets);
  }

  #gate(kind: GateKind, inputs: Bits): NetId {
    this.#made ??= new GateTable();
    const known = this.#made.find(kind, inputs);
    if (known !== NO_GATE) return known;
    this.#budget?.spend(STEPS_OF_GATE + (inputs.length >> 2));
    const net = this.sink.gate(kind, inputs);
    this.#made.add(kind, inputs, net);
    return net;
  }
}

/** Sorts a list in place; most have two entries. */
function sorted(nets: NetId[]): NetId[] {
  if (nets.length !== 2) return nets.sort((a, b) => a - b);
  const [a, b] = nets as [NetId, NetId];
  if (a > b) {
    nets[0] = b;
    nets[1] = a;
  }
  return nets;
}

/** A sorted list with each entry once. */
function distinct(nets: NetId[]): NetId[] {
  let count = 0;
  for (const net of nets) if (count === 0 || nets[count - 1] !== net) nets[count++] = net;
  nets.length = count;
  return nets;
}
