import type { CircuitBuilder } from './builder.js';
import { type Bus, type Buses, isPull, isSteady } from './busCollection.js';
import { type BusPart, NetType, Strength } from './busParts.js';
import { GateKind } from './gates.js';
import type { NetId } from './ids.js';

/** The longest way back to the net that a keeper may take. */
const MAX_STEPS = 8;

/**
 * Recognises bus keepers: a weak driver that feeds a net its own value back, through buffers and
 * an even number of inverters. It and what is weaker give way to storage.
 */
export function findKeepers(builder: CircuitBuilder, buses: Buses): void {
  for (const bus of buses.values()) {
    for (const part of bus.parts) {
      const drivesBoth = part.zero !== Strength.HighZ && part.one !== Strength.HighZ;
      if (!isSteady(part) || !isPull(part) || !drivesBoth) continue;
      if (!feedsBack(builder, buses, part)) continue;
      bus.storage = Math.max(bus.storage, part.zero, part.one) as Strength;
    }
    if (bus.storage <= Strength.Medium) continue;
    const stronger = bus.parts.filter(
      (part) => !isPull(part) || Math.max(part.zero, part.one) > bus.storage,
    );
    bus.parts.splice(0, bus.parts.length, ...stronger);
  }
}

function feedsBack(builder: CircuitBuilder, buses: Buses, keeper: BusPart): boolean {
  let net = keeper.data;
  let isInverted = false;
  for (let step = 0; step < MAX_STEPS; step++) {
    if (net === keeper.net) return !isInverted;
    if (builder.kindOf(net) === GateKind.Not) isInverted = !isInverted;
    const before = copiedFrom(builder, buses.get(net), net);
    if (before === undefined) return false;
    net = before;
  }
  return false;
}

/** The net that another one always is a copy or the inverse of. */
function copiedFrom(builder: CircuitBuilder, bus: Bus | undefined, net: NetId): NetId | undefined {
  const kind = builder.kindOf(net);
  if (bus === undefined) {
    return kind === GateKind.Buf || kind === GateKind.Not ? builder.faninOf(net)[0] : undefined;
  }
  const [only, ...others] = bus.parts;
  const isAlone = kind < 0 && others.length === 0 && bus.type === NetType.Plain;
  return isAlone && only !== undefined && isSteady(only) ? only.data : undefined;
}
