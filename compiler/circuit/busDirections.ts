import type { CircuitBuilder } from './builder.js';
import { type Bus, type Buses, busAt, isPull } from './busCollection.js';
import { type BusPart, NetType, PartKind } from './busParts.js';
import type { NetId } from './ids.js';

/**
 * Makes switches of the two-way switches of which one side is driven and the other is not: from
 * the driven side to the other, which then is driven in turn. Where no side is driven, a pull
 * counts as a driver; where there is none either, nothing comes through.
 *
 * Returns those with drivers on both sides.
 */
export function directTwoWays(
  builder: CircuitBuilder,
  buses: Buses,
  twoWays: readonly BusPart[],
): BusPart[] {
  const hasDriver = (net: NetId): boolean =>
    builder.isDriven(net) || hasPart(buses.get(net), (part) => !isPull(part));
  const isAnything = (net: NetId): boolean => {
    const bus = buses.get(net);
    const isTyped = bus !== undefined && bus.type !== NetType.Plain;
    return isTyped || builder.isDriven(net) || hasPart(bus, () => true);
  };
  const open = spread(builder, buses, twoWays, hasDriver);
  const bothDriven = open.filter(({ net, data }) => hasDriver(net) && hasDriver(data));
  const undriven = open.filter(({ net, data }) => !hasDriver(net) && !hasDriver(data));
  const pulled = spread(builder, buses, undriven, isAnything);
  bothDriven.push(...pulled.filter(({ net, data }) => isAnything(net) && isAnything(data)));
  return bothDriven;
}

const hasPart = (bus: Bus | undefined, suits: (part: BusPart) => boolean): boolean =>
  bus?.parts.some(suits) ?? false;

// All switches of one round are directed at once: two of them side by side go the same way.
function spread(
  builder: CircuitBuilder,
  buses: Buses,
  twoWays: readonly BusPart[],
  isDriven: (net: NetId) => boolean,
): readonly BusPart[] {
  let open = twoWays;
  for (;;) {
    const ready = open.filter(({ net, data }) => isDriven(net) !== isDriven(data));
    if (ready.length === 0) return open;
    const directed = ready.map((part): BusPart => {
      const turned = isDriven(part.net) ? { net: part.data, data: part.net } : {};
      return { ...part, ...turned, kind: PartKind.Switch };
    });
    for (const part of directed) busAt(builder, buses, part.net).parts.push(part);
    const done = new Set(ready);
    open = open.filter((part) => !done.has(part));
  }
}
