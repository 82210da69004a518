import { type NetId, netId } from '../../../circuit/ids.js';
import { blockNamesOf } from './blockNames.js';
import type { ModuleBody } from './body.js';
import { checkConflicts } from './conflicts.js';
import { constantNetsOf } from './constantNets.js';
import { handOnFloating } from './copies.js';
import {
  countTypes,
  driveDefaults,
  driveSupplies,
  type NetClasses,
  netClassesOf,
  netTypesOf,
} from './defaults.js';
import { fuseBuffers } from './fuseBuffers.js';
import type { Boundary } from './ports.js';
import { pruneUnused } from './pruning.js';
import { isSmallCell } from './smallCells.js';
import { Drive, type Repeat, type Template } from './template.js';
import { mayBeUndriven, reportUndriven } from './undriven.js';
import { type Usage, usageOf, usesOf } from './usage.js';
import { valueNamesOf } from './valueNames.js';

/** Turns what was recorded of a module into a template: every net has one driver at most. */
export function complete(body: ModuleBody, boundary: Boundary): Template {
  const { builder, children, design, module } = body;
  const classes: NetClasses = netClassesOf(body);
  driveSupplies(body, classes);
  const usage = countUsage(body, classes);
  checkConflicts(body, usage, classes);
  const defaults = driveDefaults(body, usage, boundary);
  const canonical = fuseBuffers(builder, usage);
  const find = (net: number): number => canonical?.[net] ?? net;
  const nets = new Uint32Array(boundary.nets.length);
  for (let place = 0; place < nets.length; place++) nets[place] = find(boundary.nets[place]!);
  const outerNets = [...body.outerNets].map(([outside, net]) => ({
    net: netId(find(net)),
    outside,
  }));
  const outerMemories = [...body.outerMemories].map(([outside, { number }]) => ({
    memory: number,
    outside,
  }));
  // What drives an own variable has taken its value along.
  const farInitials = [...body.initialValues].filter(([net]) => !builder.isDriven(net));
  const valueNames = valueNamesOf(body);
  const constants = constantNetsOf(builder, usage, nets, find, defaults);
  for (const net of boundary.nets) usage.markPort(net);
  const mayHaveOpen = mayBeUndriven(body, usage);
  const template: Template = {
    name: body.text(module.name),
    isCell: module.isCell || isSmallCell(body, boundary),
    recording: builder,
    children,
    canonical,
    unused: pruneUnused(builder, children, nets, canonical),
    ports: boundary.ports,
    portOfName: boundary.portOfName,
    hasPortOrder: true,
    boundary: nets,
    ...withLateNets(body, usage, usesOf(usage, nets, find)),
    repeats: repeatsOf(nets),
    blocks: blockNamesOf(body, find),
    scope: body.root,
    netTypes: netTypesOf(classes, find),
    ...(mayHaveOpen && { mayHaveOpen: true as const }),
    ...(constants.size > 0 && { constants }),
    ...(valueNames.length > 0 && { valueNames }),
    ...(defaults.size > 0 && { defaults }),
    ...(farInitials.length > 0 && { farInitials }),
    ...(body.dependsOnPlace && { outerNets, outerMemories }),
  };
  const { driven } = design;
  markDriven(body, usage);
  if (mayHaveOpen) {
    design.atEnd(() => reportUndriven(body, usage, (net) => driven.has(template, net)));
  }
  return template;
}

// Nets that come later stand for nets of instances, which a hierarchical name has reached.
function withLateNets(
  { children, design }: ModuleBody,
  usage: Usage,
  uses: ReturnType<typeof usesOf>,
): ReturnType<typeof usesOf> {
  const inside = (net: NetId) => {
    const { child, childNet } = children.reached(net)!;
    return { template: design.templates[children.template(child)]!, childNet };
  };
  return {
    ...uses,
    driveOf: (net) => {
      if (usage.knows(net)) return uses.driveOf(net);
      const { template, childNet } = inside(net);
      return template.driveOf(childNet);
    },
    readsNet: (net) => {
      if (usage.knows(net)) return uses.readsNet(net);
      const { template, childNet } = inside(net);
      return template.readsNet(childNet);
    },
  };
}

/** Puts the nets of instances on record that are driven here, which their modules do not know. */
function markDriven({ children, design }: ModuleBody, usage: Usage): void {
  if (!children.hasImports) return;
  for (let child = 0; child < children.count; child++) {
    for (const { childNet, net } of children.imports(child)) {
      if (usage.driveOf(net) === Drive.None) continue;
      design.driven.add(design.templates[children.template(child)]!, childNet);
    }
  }
}

function countUsage(body: ModuleBody, classes: NetClasses): Usage {
  const { builder, children, design } = body;
  const count = (): Usage => {
    const usage = usageOf(builder, children, design.templates);
    countTypes(usage, classes);
    return usage;
  };
  const usage = count();
  return handOnFloating(body, usage) ? count() : usage;
}

const noRepeats: readonly Repeat[] = [];

/** The places of a boundary where a net stands that stood before. */
function repeatsOf(boundary: Uint32Array): readonly Repeat[] {
  if (isAscending(boundary)) return noRepeats;
  const repeats: Repeat[] = [];
  const firstPlace = new Map<number, number>();
  boundary.forEach((net, second) => {
    const first = firstPlace.get(net);
    if (first === undefined) firstPlace.set(net, second);
    else repeats.push({ first, second });
  });
  return repeats;
}

function isAscending(list: Uint32Array): boolean {
  for (let i = 1; i < list.length; i++) if (list[i]! <= list[i - 1]!) return false;
  return true;
}
