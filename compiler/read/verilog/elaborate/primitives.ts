import type { PrimitiveSyntax } from '../syntax.js';
import { Children } from './children.js';
import type { Design } from './design.js';
import { fuseBuffers } from './fuseBuffers.js';
import { lowerPrimitive } from './lowerPrimitive.js';
import { pruneUnused } from './pruning.js';
import { Recording } from './recording.js';
import { Flag } from './symbols.js';
import type { Template, TemplatePort } from './template.js';
import { usageOf, usesOf } from './usage.js';

/** Compiles a user-defined primitive; its instances make no scope (IEEE 1364-2005, clause 8). */
export function compilePrimitive(design: Design, primitive: PrimitiveSyntax): Template {
  const recording = new Recording();
  const children = new Children();
  const { index, offset } = design.sources.locate(primitive.nameStart);
  recording.at(index, offset);
  const first = recording.declare(primitive.ports.length);
  lowerPrimitive(design, primitive, recording, first);
  const usage = usageOf(recording, children, []);
  const boundary = Uint32Array.from(primitive.ports, (_, place) => first + place);
  const canonical = fuseBuffers(recording, usage);
  const ports = primitive.ports.map(
    (name, place): TemplatePort => ({
      name,
      direction: place === 0 ? Flag.Output : Flag.Input,
      offset: place,
      width: 1,
      range: undefined,
    }),
  );
  return {
    name: design.text(primitive.name),
    // Its place in the netlist says more than that of its table.
    isCell: true,
    recording,
    children,
    canonical,
    unused: pruneUnused(recording, children, boundary, canonical),
    ports,
    // The terminals of a primitive have no names for its instances (clause 8.6).
    portOfName: new Map(),
    hasPortOrder: true,
    boundary,
    ...usesOf(usage, boundary, (net) => canonical?.[net] ?? net),
    repeats: [],
    blocks: [],
    scope: undefined,
  };
}
