import type { CircuitBuilder } from './builder.js';
import { GateKind } from './gates.js';
import type { NetId } from './ids.js';

/** A gate that is not built yet. */
interface Gate {
  readonly kind: GateKind;
  readonly fanin: readonly NetId[];
}

/** A value: a net that has it already, or the gate that makes it. */
export type Value = NetId | Gate;

/**
 * Makes the gates of resolved buses: folds constants, and makes each gate only once.
 *
 * What is folded keeps the three-valued meaning of the gate tables (IEEE 1364-2005, clause 7.2).
 */
export class BusGates {
  readonly #builder: CircuitBuilder;
  readonly #made = new Map<string, NetId>();

  constructor(builder: CircuitBuilder) {
    this.#builder = builder;
  }

  get zero(): NetId {
    return this.#constant(GateKind.Zero);
  }

  get one(): NetId {
    return this.#constant(GateKind.One);
  }

  get unknown(): NetId {
    return this.#constant(GateKind.Unknown);
  }

  isZero(value: Value): boolean {
    return this.#kindOf(value) === GateKind.Zero;
  }

  isOne(value: Value): boolean {
    return this.#kindOf(value) === GateKind.One;
  }

  not(value: Value): Value {
    if (this.isZero(value)) return this.one;
    if (this.isOne(value)) return this.zero;
    const net = this.net(value);
    const inverted = this.#builder.kindOf(net) === GateKind.Not;
    return inverted ? this.#builder.faninOf(net)[0]! : { kind: GateKind.Not, fanin: [net] };
  }

  and(...values: readonly Value[]): Value {
    return this.#dominated(GateKind.And, values, this.zero, this.one);
  }

  or(...values: readonly Value[]): Value {
    return this.#dominated(GateKind.Or, values, this.one, this.zero);
  }

  /** `whenOne` where `select` is 1, `whenZero` where it is 0. */
  mux(select: Value, whenZero: Value, whenOne: Value): Value {
    if (this.isZero(select) || whenZero === whenOne) return whenZero;
    if (this.isOne(select)) return whenOne;
    if (this.isZero(whenZero)) return this.and(select, whenOne);
    if (this.isOne(whenOne)) return this.or(select, whenZero);
    if (this.isZero(whenOne)) return this.and(this.not(select), whenZero);
    if (this.isOne(whenZero)) return this.or(this.not(select), whenOne);
    const fanin = [select, whenZero, whenOne].map((value) => this.net(value));
    return { kind: GateKind.Mux, fanin };
  }

  /** `value` as long as `control` is known, and x where that is x. */
  knownBy(control: Value, value: NetId): NetId {
    const unsure = this.and(control, this.not(control));
    if (this.isZero(unsure)) return value;
    return this.net({ kind: GateKind.Xor, fanin: [value, this.net(unsure)] });
  }

  /** The net of a value. */
  net(value: Value): NetId {
    if (typeof value === 'number') return value;
    const key = `${value.kind},${value.fanin.join()}`;
    const known = this.#made.get(key);
    if (known !== undefined) return known;
    const net = this.#builder.gate(value.kind, value.fanin);
    this.#made.set(key, net);
    return net;
  }

  /** Drives a net by a value. */
  drive(net: NetId, value: Value): void {
    const kind = this.#kindOf(value);
    if (typeof value !== 'number') this.#builder.drive(net, value.kind, value.fanin);
    else if (kind <= GateKind.Unknown) this.#builder.drive(net, kind as GateKind, []);
    else this.#builder.drive(net, GateKind.Buf, [value]);
  }

  #constant(kind: GateKind): NetId {
    return this.net({ kind, fanin: [] });
  }

  // A net without driver is no constant: it may get one.
  #kindOf(value: Value): number {
    if (typeof value !== 'number') return value.kind;
    const kind = this.#builder.kindOf(value);
    return kind < 0 ? GateKind.Buf : kind;
  }

  #dominated(kind: GateKind, values: readonly Value[], dominating: NetId, neutral: NetId): Value {
    const isKind = (value: Value, other: NetId) => this.#kindOf(value) === this.#kindOf(other);
    if (values.some((value) => isKind(value, dominating))) return dominating;
    const others = values.filter((value) => !isKind(value, neutral));
    if (others.length === 1) return others[0]!;
    const rest = new Set(others.map((value) => this.net(value)));
    const [only] = rest;
    if (only === undefined) return neutral;
    if (rest.size === 1) return only;
    return { kind, fanin: [...rest].sort((a, b) => a - b) };
  }
}
