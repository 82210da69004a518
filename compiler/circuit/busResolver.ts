import type { CircuitBuilder } from './builder.js';
import type { Bus, Buses } from './busCollection.js';
import { BusGates, type Value } from './busGates.js';
import { type Contribution, type Level, levelsOf, resolveLevels } from './busLevels.js';
import { type BusPart, NetType, PartKind, Strength } from './busParts.js';
import { type NetId, NO_NET } from './ids.js';

/** With which strength a net is driven, and when; `driven` excludes when a greater one drives. */
interface Shown {
  readonly strength: Strength;
  readonly driven: Value;
}

/** What a switch makes of a strength (IEEE 1364-2005, clause 7.11). */
const passedStrength = (strength: Strength): Strength =>
  strength === Strength.Supply ? Strength.Strong : strength;

/** What a resistive switch makes of a strength (clause 7.12). */
const reducedStrength: Readonly<Record<Strength, Strength>> = {
  [Strength.Supply]: Strength.Pull,
  [Strength.Strong]: Strength.Pull,
  [Strength.Pull]: Strength.Weak,
  [Strength.Large]: Strength.Medium,
  [Strength.Weak]: Strength.Medium,
  [Strength.Medium]: Strength.Small,
  [Strength.Small]: Strength.Small,
  [Strength.HighZ]: Strength.HighZ,
};

/** Builds the logic of one bus after another; those that a bus lets through come before it. */
export class BusResolver {
  readonly #builder: CircuitBuilder;
  readonly #buses: Buses;
  /** Nets whose value drives a bus at all times. */
  readonly #steady: ReadonlyMap<NetId, readonly NetId[]>;
  readonly #gates: BusGates;
  readonly #isRead: Uint8Array;
  readonly #levels = new Map<Bus, readonly Level[]>();

  constructor(builder: CircuitBuilder, buses: Buses, steady: ReadonlyMap<NetId, readonly NetId[]>) {
    this.#builder = builder;
    this.#buses = buses;
    this.#steady = steady;
    this.#isRead = builder.readNets();
    for (const { parts } of buses.values()) for (const part of parts) this.#markReads(part);
    this.#gates = new BusGates(builder);
  }

  resolve(bus: Bus): void {
    const { net, parts } = bus;
    const gates = this.#gates;
    // It has a driver that decides alone.
    if (this.#builder.isDriven(net)) return;
    const [part] = parts;
    const place = part ?? this.#placeOf(net);
    this.#builder.at(place.sourceIndex, place.offset);
    const contributions = this.#contributions(bus);
    const levels = levelsOf(gates, contributions);
    this.#levels.set(bus, levels);
    if (levels.length === 0) return;
    const isCopy = parts.length === 1 && part!.kind === PartKind.Copy && part!.control === NO_NET;
    if (isCopy && contributions.length === 1 && bus.storage === Strength.HighZ) {
      gates.drive(net, part!.data);
      return;
    }
    const driven = gates.or(...levels.map((level) => level.driven));
    const isKept = bus.storage !== Strength.HighZ && !gates.isOne(driven);
    const floating = isKept || gates.isOne(driven) ? undefined : gates.unknown;
    const { value, conflict } = resolveLevels(gates, bus.type, levels, floating);
    if (isKept) {
      this.#builder.latch({ output: net, enable: gates.net(driven), data: gates.net(value) });
    } else gates.drive(net, value);
    if (!gates.isZero(conflict)) this.#builder.check('conflict', net, gates.net(conflict));
    if (isKept || gates.isOne(driven) || this.#isRead[net] !== 1) return;
    this.#builder.check('float', net, gates.net(gates.not(driven)));
  }

  // A copy or a switch hands z on; all other pins read it as x.
  #markReads({ kind, data, control }: BusPart): void {
    if (kind === PartKind.Driver) this.#isRead[data] = 1;
    if (control !== NO_NET) this.#isRead[control] = 1;
  }

  #placeOf(net: NetId): { readonly sourceIndex: number; readonly offset: number } {
    const [first] = this.#steady.get(net) ?? [net];
    return this.#builder.placeOf(first!);
  }

  #contributions(bus: Bus): Contribution[] {
    const { one } = this.#gates;
    const contributions = (this.#steady.get(bus.net) ?? []).map((data) =>
      driver(data, one, Strength.Strong),
    );
    for (const part of bus.parts) contributions.push(...this.#contributionsOf(part));
    if (bus.type === NetType.Pull0)
      contributions.push(driver(this.#gates.zero, one, Strength.Pull));
    if (bus.type === NetType.Pull1) contributions.push(driver(one, one, Strength.Pull));
    return contributions;
  }

  #contributionsOf(part: BusPart): Contribution[] {
    const { zero, one } = part;
    const gates = this.#gates;
    const control = part.control === NO_NET ? gates.one : part.control;
    const data = part.isConditional ? gates.knownBy(control, part.data) : part.data;
    switch (part.kind) {
      case PartKind.Switch:
        return this.#shown(data).map(({ strength, driven }) => {
          const through = part.isResistive ? reducedStrength[strength] : passedStrength(strength);
          return driver(data, gates.and(control, driven), through);
        });
      case PartKind.Copy: {
        const driven = gates.or(...this.#shown(part.data).map((shown) => shown.driven));
        return [{ data, enable: gates.and(control, driven), zero, one }];
      }
      default:
        // Where one of the values is not driven, the other one is a constant that is on or off.
        if (one === Strength.HighZ) {
          return [driver(gates.zero, gates.and(control, gates.not(data)), zero)];
        }
        if (zero === Strength.HighZ) return [driver(gates.one, gates.and(control, data), one)];
        return [{ data, enable: control, zero, one }];
    }
  }

  /** How a net is driven, bus or not. */
  #shown(net: NetId): Shown[] {
    const gates = this.#gates;
    const bus = this.#buses.get(net);
    const levels = bus && this.#levels.get(bus);
    if (levels === undefined) {
      return this.#builder.isDriven(net) ? [{ strength: Strength.Strong, driven: gates.one }] : [];
    }
    let above: Value = gates.zero;
    const shown: Shown[] = [];
    for (const { strength, driven } of levels) {
      shown.push({ strength, driven: gates.and(driven, gates.not(above)) });
      above = gates.or(above, driven);
    }
    if (bus!.storage !== Strength.HighZ && !gates.isOne(above)) {
      shown.push({ strength: bus!.storage, driven: gates.not(above) });
    }
    return shown;
  }
}

const driver = (data: NetId, enable: Value, strength: Strength): Contribution => ({
  data,
  enable,
  zero: strength,
  one: strength,
});
