import { blockNamesOf } from './blockNames.js';
import type { ModuleBody } from './body.js';
import { resolveConflicts } from './conflicts.js';
import { driveDefaults, driveSupplies, type NetClasses, netClassesOf } from './defaults.js';
import { fuseBuffers } from './fuseBuffers.js';
import type { Boundary } from './ports.js';
import { pruneUnused } from './pruning.js';
import type { Repeat, Template } from './template.js';
import { reportUndriven } from './undriven.js';
import { usageOf } from './usage.js';

/** Turns what was recorded of a module into a template: every net has one driver at most. */
export function complete(body: ModuleBody, boundary: Boundary): Template {
  const { builder, children, design, module } = body;
  const classes: NetClasses = netClassesOf(body);
  driveSupplies(body, classes);
  resolveConflicts(body, usageOf(builder, children, design.templates), classes);
  const usage = usageOf(builder, children, design.templates);
  driveDefaults(body, usage, classes, boundary);
  reportUndriven(body, usage, boundary);
  const canonical = fuseBuffers(builder, usage);
  const find = (net: number): number => canonical?.[net] ?? net;
  const nets = Uint32Array.from(boundary.nets, find);
  return {
    name: body.text(module.name),
    isCell: module.isCell,
    recording: builder,
    children,
    canonical,
    unused: pruneUnused(builder, children, nets, canonical),
    ports: boundary.ports,
    portOfName: boundary.portOfName,
    hasPortOrder: true,
    boundary: nets,
    drives: Uint8Array.from(nets, (net) => (usage.drivers[net]! > 0 ? 1 : 0)),
    reads: Uint8Array.from(nets, (net) => usage.isRead[net]!),
    repeats: repeatsOf(nets),
    blocks: blockNamesOf(body, find),
    scope: body.root,
    // Nets that come later stand for nets of instances, which a hierarchical name has reached.
    drivesNet: (net) => (usage.drivers[find(net)] ?? 1) > 0,
  };
}

/** The places of a boundary where a net stands that stood before. */
function repeatsOf(boundary: Uint32Array): Repeat[] {
  const repeats: Repeat[] = [];
  const firstPlace = new Map<number, number>();
  boundary.forEach((net, second) => {
    const first = firstPlace.get(net);
    if (first === undefined) firstPlace.set(net, second);
    else repeats.push({ first, second });
  });
  return repeats;
}
