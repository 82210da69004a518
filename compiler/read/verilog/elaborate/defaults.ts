import { GateKind } from '../../../circuit/gates.js';
import { type NetId, netId } from '../../../circuit/ids.js';
import type { ModuleBody } from './body.js';
import type { Boundary } from './ports.js';
import { Flag, NetClass, SymbolKind } from './symbols.js';
import type { Usage } from './usage.js';

/** The `NetClass` of each net that is not plain; joined nets under the oldest of them. */
export type NetClasses = ReadonlyMap<number, number>;

/** Collects the nets whose type says more than `wire`. */
export function netClassesOf(body: ModuleBody): NetClasses {
  const classes = new Map<number, number>();
  for (const { symbols } of body.blocks) {
    for (let symbol = 0; symbol < symbols.count; symbol++) {
      const netClass = symbols.netClass(symbol);
      if (netClass === NetClass.Plain || symbols.kind(symbol) !== SymbolKind.Signal) continue;
      const first = symbols.value(symbol);
      for (let bit = 0; bit < symbols.width(symbol); bit++) {
        classes.set(body.builder.find(netId(first + bit)), netClass);
      }
    }
  }
  return classes;
}

/** Drives the nets of type `supply0` and `supply1`. */
export function driveSupplies(body: ModuleBody, classes: NetClasses): void {
  for (const [net, netClass] of classes) {
    if (netClass === NetClass.Supply0) driveConstant(body, netId(net), GateKind.Zero);
    else if (netClass === NetClass.Supply1) driveConstant(body, netId(net), GateKind.One);
  }
}

/**
 * Gives nets without driver the value that they have by themselves: by a pull, by their type
 * (`tri0`, `tri1`), or, for a variable that nothing assigns, at power-up.
 */
export function driveDefaults(
  body: ModuleBody,
  usage: Usage,
  classes: NetClasses,
  boundary: Boundary,
): void {
  const outside = drivenOutside(body, boundary);
  const drive = (net: NetId, kind: GateKind): void => {
    const root = body.builder.find(net);
    if (usage.drivers[root] !== 0 || outside.has(root)) return;
    driveConstant(body, root, kind);
    usage.drivers[root] = 1;
  };
  for (const [net, kind] of body.pulls) drive(net, kind);
  for (const [net, netClass] of classes) {
    if (netClass === NetClass.Pull0) drive(netId(net), GateKind.Zero);
    else if (netClass === NetClass.Pull1) drive(netId(net), GateKind.One);
  }
  for (const [net, value] of body.initialValues) {
    drive(net, value === 1 ? GateKind.One : GateKind.Zero);
  }
}

/** Nets of ports that take their value from the instance's connection. */
function drivenOutside({ builder }: ModuleBody, { ports, nets }: Boundary): Set<number> {
  const outside = new Set<number>();
  for (const { direction, offset, width } of ports) {
    if (direction === Flag.Output) continue;
    for (let place = offset; place < offset + width; place++) {
      outside.add(builder.find(nets[place]!));
    }
  }
  return outside;
}

function driveConstant({ builder }: ModuleBody, net: NetId, kind: GateKind): void {
  const { source, offset } = builder.netOrigin(net);
  builder.at(source, offset);
  builder.drive(net, kind, []);
}
