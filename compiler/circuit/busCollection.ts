import type { CircuitBuilder } from './builder.js';
import { type BusPart, isWeak, NetType, PartKind, packTraits, Strength } from './busParts.js';
import { type NetId, NO_NET } from './ids.js';

/** A net with drivers that are not always on, or not of full strength, or with a type. */
export interface Bus {
  readonly net: NetId;
  readonly type: NetType;
  /** All but two-way switches, which become switches once their direction is known. */
  readonly parts: BusPart[];
  /** The strength with which it keeps its last value while nothing drives it; `HighZ`: not. */
  storage: Strength;
}

/** All buses by their net. */
export type Buses = Map<NetId, Bus>;

/** The bus of a net, made if there is none yet. */
export function busAt(builder: CircuitBuilder, buses: Buses, net: NetId): Bus {
  const known = buses.get(net);
  if (known !== undefined) return known;
  const type = builder.netType(net);
  const storage = type === NetType.Charge ? Strength.Medium : Strength.HighZ;
  const bus: Bus = { net, type, parts: [], storage };
  buses.set(net, bus);
  return bus;
}

/** Collects the buses of a circuit, and the two-way switches apart from them. */
export function collectBuses(builder: CircuitBuilder): { buses: Buses; twoWays: BusPart[] } {
  const buses: Buses = new Map();
  const twoWays: BusPart[] = [];
  for (const net of builder.typedNets()) busAt(builder, buses, net);
  for (let i = 0; i < builder.busParts.count; i++) {
    const part = builder.busParts.at(i);
    if (part.kind === PartKind.TwoWay) twoWays.push(part);
    else busAt(builder, buses, part.net).parts.push(part);
  }
  return { buses, twoWays };
}

/** Whether a part is on at all times. */
export const isSteady = ({ kind, control }: BusPart): boolean =>
  kind === PartKind.Driver && control === NO_NET;

/** Whether a part only pulls or keeps: a gate beats it. */
export const isPull = (part: BusPart): boolean => isWeak(packTraits(part));
