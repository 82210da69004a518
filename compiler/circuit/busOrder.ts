import type { Bus, Buses } from './busCollection.js';
import { type BusPart, PartKind } from './busParts.js';

/** The buses in an order in which each one comes after those that it lets through. */
export interface BusOrder {
  readonly order: readonly Bus[];
  /** Switches that stand in a ring; empty if `order` has all buses. */
  readonly ring: readonly BusPart[];
}

/**
 * Orders buses by their switches and copies. Where these stand in a ring, the copies among them
 * become plain drivers; a ring of switches alone has no order.
 */
export function orderBuses(buses: Buses): BusOrder {
  const first = sorted(buses);
  if (first.length === buses.size) return { order: first, ring: [] };
  const isDone = new Set(first);
  const inRing = [...buses.values()].filter((bus) => !isDone.has(bus));
  for (const { parts } of inRing) {
    parts.forEach((part, i) => {
      if (part.kind === PartKind.Copy) parts[i] = { ...part, kind: PartKind.Driver };
    });
  }
  const order = sorted(buses);
  if (order.length === buses.size) return { order, ring: [] };
  return { order, ring: ringParts(buses, new Set(order)) };
}

/** The bus whose drivers a part lets through, if it is one. */
export function sourceOf(buses: Buses, { kind, data }: BusPart): Bus | undefined {
  return kind === PartKind.Driver ? undefined : buses.get(data);
}

/** The parts between buses that have no order, without those that only lead out of a ring. */
function ringParts(buses: Buses, ordered: ReadonlySet<Bus>): BusPart[] {
  let open = [...buses.values()].filter((bus) => !ordered.has(bus));
  for (;;) {
    const sources = new Set(
      open.flatMap(({ parts }) => parts.map((part) => sourceOf(buses, part))),
    );
    const inside = open.filter((bus) => sources.has(bus));
    if (inside.length === open.length) break;
    open = inside;
  }
  const members = new Set<Bus | undefined>(open);
  return open.flatMap(({ parts }) => parts.filter((part) => members.has(sourceOf(buses, part))));
}

// Topological order after Kahn, "Topological sorting of large networks", CACM 5(11), 1962.
function sorted(buses: Buses): Bus[] {
  const followers = new Map<Bus, Bus[]>();
  const waiting = new Map<Bus, number>();
  for (const bus of buses.values()) {
    let count = 0;
    for (const part of bus.parts) {
      const source = sourceOf(buses, part);
      if (source === undefined) continue;
      count++;
      const known = followers.get(source);
      if (known === undefined) followers.set(source, [bus]);
      else known.push(bus);
    }
    waiting.set(bus, count);
  }
  const order = [...buses.values()].filter((bus) => waiting.get(bus) === 0);
  for (let next = 0; next < order.length; next++) {
    for (const bus of followers.get(order[next]!) ?? []) {
      const left = waiting.get(bus)! - 1;
      waiting.set(bus, left);
      if (left === 0) order.push(bus);
    }
  }
  return order;
}
