import type { CircuitBuilder } from './builder.js';
import { type Buses, collectBuses, isPull } from './busCollection.js';
import { directTwoWays } from './busDirections.js';
import { findKeepers } from './busKeepers.js';
import { orderBuses, sourceOf } from './busOrder.js';
import { type BusPart, NetType, PartKind, Strength } from './busParts.js';
import { BusResolver } from './busResolver.js';
import type { NetId } from './ids.js';

/** What keeps buses from being resolved. */
export interface BusProblem {
  /**
   * `bothDriven`: a two-way switch with drivers on both sides; `ring`: switches that let each
   * other's output through; `charge`: a switch between two nets that store their value.
   */
  readonly kind: 'bothDriven' | 'ring' | 'charge';
  readonly sourceIndex: number;
  readonly offset: number;
}

/**
 * Makes ordinary gates and latches of all that drives nets part of the time or weakly, after IEEE
 * 1364-2005, clauses 4.6, 7.9 and 7.10; a net that no driver drives is x.
 *
 * Every driver and every input must be in place; output ports too, for a bus that nobody reads is
 * not checked for floating. Adds to `Circuit.checks`. A net with storage becomes a latch that is
 * transparent while something drives it. Where it returns problems, nothing has been built.
 */
export function resolveBuses(builder: CircuitBuilder): readonly BusProblem[] {
  const { buses, twoWays } = collectBuses(builder);
  if (buses.size === 0 && twoWays.length === 0) return [];
  const bothDriven = directTwoWays(builder, buses, twoWays);
  findKeepers(builder, buses);
  const { order, ring } = orderBuses(buses);
  const problems = [
    ...bothDriven.map((part) => problem('bothDriven', part)),
    ...ring.map((part) => problem('ring', part)),
    ...chargeSharing(buses).map((part) => problem('charge', part)),
  ];
  if (problems.length > 0) return problems;
  const resolver = new BusResolver(builder, buses, steadyDrivers(builder, buses));
  for (const bus of order) resolver.resolve(bus);
  return [];
}

function problem(kind: BusProblem['kind'], { sourceIndex, offset }: BusPart): BusProblem {
  return { kind, sourceIndex, offset };
}

// What comes out depends on capacitances where a stored value meets another one.
function chargeSharing(buses: Buses): BusPart[] {
  return [...buses.values()].flatMap(({ storage, parts }) =>
    parts.filter(
      (part) =>
        storage !== Strength.HighZ &&
        part.kind === PartKind.Switch &&
        (sourceOf(buses, part)?.storage ?? Strength.HighZ) !== Strength.HighZ,
    ),
  );
}

/**
 * The nets of the gates, registers and latches that drive each bus, freed from it. A bus that
 * they drive whatever else there is keeps its driver, and is left out.
 */
function steadyDrivers(builder: CircuitBuilder, buses: Buses): Map<NetId, NetId[]> {
  const drivers = new Map<NetId, NetId[]>();
  for (const { net, driver } of builder.extraDrivers) {
    const known = drivers.get(net);
    if (known === undefined) drivers.set(net, [driver]);
    else known.push(driver);
  }
  const shared = [...buses.values()].filter(({ net, parts }) => {
    const isDecided = parts.every(isPull) && !drivers.has(net);
    return builder.isDriven(net) && !isDecided;
  });
  const nets = shared.map(({ net }) => net);
  builder.detach(nets).forEach((driver, i) => {
    drivers.set(nets[i]!, [driver, ...(drivers.get(nets[i]!) ?? [])]);
  });
  for (const { net, type } of buses.values()) {
    const isWired = type === NetType.And || type === NetType.Or;
    const known = drivers.get(net);
    // A second one on any other net is a mistake, which the caller reports.
    if (known !== undefined && !isWired) drivers.set(net, known.slice(0, 1));
  }
  return drivers;
}
