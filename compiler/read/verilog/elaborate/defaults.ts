import { type NetType, PartKind, Strength } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { NO_NET, netId } from '../../../circuit/ids.js';
import type { ModuleBody } from './body.js';
import type { Boundary } from './ports.js';
import type { Recording } from './recording.js';
import { Flag, NetClass } from './symbols.js';
import { Drive } from './template.js';
import type { Usage } from './usage.js';

/** The `NetClass` of each net that is not plain; joined nets under the oldest of them. */
export type NetClasses = ReadonlyMap<number, number>;

/** Collects the nets whose type says more than `wire`. */
export function netClassesOf(body: ModuleBody): NetClasses {
  const classes = new Map<number, number>();
  for (const block of body.blocks) {
    const { symbols } = block;
    for (let place = 0; place < symbols.count; place++) {
      const symbol = symbols.at(place);
      const netClass = symbols.netClass(symbol);
      if (netClass === NetClass.Plain) continue;
      for (const { first } of block.vectors(symbol)) {
        for (let bit = 0; bit < symbols.width(symbol); bit++) {
          classes.set(body.builder.find(netId(first + bit)), netClass);
        }
      }
    }
  }
  return classes;
}

/** Drives the nets of type `supply0` and `supply1` (IEEE 1364-2005, clause 4.6.7). */
export function driveSupplies({ builder }: ModuleBody, classes: NetClasses): void {
  const { Supply: supply } = Strength;
  for (const [net, netClass] of classes) {
    if (netClass !== NetClass.Supply0 && netClass !== NetClass.Supply1) continue;
    const { source, offset } = builder.netOrigin(net);
    builder.at(source, offset);
    const kind = netClass === NetClass.Supply0 ? GateKind.Zero : GateKind.One;
    const traits = { kind: PartKind.Driver, zero: supply, one: supply };
    builder.busPart(netId(net), builder.constant(kind), NO_NET, traits);
  }
}

/** Counts what the type of a net does to it. */
export function countTypes(usage: Usage, classes: NetClasses): void {
  for (const [net, netClass] of classes) {
    if (isWired(netClass)) usage.allowSeveral(net);
    else if (netClass === NetClass.Pull0 || netClass === NetClass.Pull1) {
      usage.drive(netId(net), Drive.Weak);
    }
  }
}

/** Whether nets of a class may have several drivers that are on at once. */
export const isWired = (netClass: number | undefined): boolean =>
  netClass === NetClass.And || netClass === NetClass.Or;

/** The classes that the circuit itself knows, for a template. */
export function netTypesOf(
  classes: NetClasses,
  find: (net: number) => number,
): [net: number, type: NetType][] {
  return [...classes].flatMap(([net, netClass]): [number, NetType][] =>
    netClass === NetClass.Supply0 || netClass === NetClass.Supply1
      ? []
      : [[find(net), netClass as NetType]],
  );
}

const none: ReadonlySet<number> = new Set();

/** Gives a variable that nothing assigns its value at power-up; returns the drivers that do. */
export function driveDefaults(
  { builder, initialValues, outerNets }: ModuleBody,
  usage: Usage,
  boundary: Boundary,
): ReadonlySet<number> {
  if (initialValues.size === 0) return none;
  const drivers = new Set<number>();
  const outside = drivenOutside(builder, boundary);
  for (const net of outerNets.values()) outside.add(builder.find(net));
  for (const [net, value] of initialValues) {
    const root = builder.find(net);
    if (usage.driveOf(root) !== Drive.None || outside.has(root)) continue;
    const { source, offset } = builder.netOrigin(root);
    builder.at(source, offset);
    drivers.add(builder.driverCount);
    builder.drive(root, value === 1 ? GateKind.One : GateKind.Zero, []);
    usage.drive(root, Drive.Full);
  }
  return drivers;
}

/** Nets of ports that take their value from the instance's connection. */
function drivenOutside(builder: Recording, { ports, nets }: Boundary): Set<number> {
  const outside = new Set<number>();
  for (const { direction, offset, width } of ports) {
    if (direction === Flag.Output) continue;
    for (let place = offset; place < offset + width; place++) {
      outside.add(builder.find(nets[place]!));
    }
  }
  return outside;
}
