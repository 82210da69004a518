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
  const isOrdered = new Set(order);
  const ring = inRing
    .filter((bus) => !isOrdered.has(bus))
    .flatMap(({ parts }) => parts.filter((part) => isOpen(buses, isOrdered, part)));
  return { order, ring };
}

/** The bus whose drivers a part lets through, if it is one. */
export function sourceOf(buses: Buses, { kind, data }: BusPart): Bus | undefined {
  return kind === PartKind.Driver ? undefined : buses.get(data);
}

function isOpen(buses: Buses, ordered: ReadonlySet<Bus>, part: BusPart): boolean {
  const source = sourceOf(buses, part);
  return source !== undefined && !ordered.has(source);
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
