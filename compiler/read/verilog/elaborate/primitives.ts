import { netId } from '../../../circuit/ids.js';
import type { PrimitiveSyntax } from '../syntax.js';
import { Children } from './children.js';
import type { Design } from './design.js';
import { fuseBuffers } from './fuseBuffers.js';
import { lowerPrimitive } from './lowerPrimitive.js';
import { pruneUnused } from './pruning.js';
import { Recording } from './recording.js';
import { Flag } from './symbols.js';
import type { Template, TemplatePort } from './template.js';
import { type Ties, withoutTied } from './tiedPrimitive.js';
import { usageOf, usesOf } from './usage.js';

/** So many inputs can be told apart in the number that stands for what they are tied to. */
const MAX_TIED = 30;

/** Compiles a user-defined primitive; its instances make no scope (IEEE 1364-2005, clause 8). */
export function compilePrimitive(design: Design, primitive: PrimitiveSyntax): Template {
  const inputs = primitive.ports.length - 1;
  const untied = compileTied(design, primitive, []);
  if (inputs > MAX_TIED) return untied;
  const known = new Map<number, number>();
  return {
    ...untied,
    tied: (key) => {
      let template = known.get(key);
      if (template === undefined) {
        const ties = tiesOf(key, inputs);
        template = design.add(compileTied(design, primitive, ties), primitive);
        known.set(key, template);
      }
      return template;
    },
  };
}

/** The digits of a number of base 3: 0 for what may change, then 0 and 1. */
function tiesOf(key: number, inputs: number): Ties {
  return Array.from({ length: inputs }, (_, input) => {
    const digit = Math.floor(key / 3 ** input) % 3;
    return digit === 0 ? undefined : digit === 1 ? 0 : 1;
  });
}

function compileTied(design: Design, primitive: PrimitiveSyntax, ties: Ties): Template {
  const recording = new Recording();
  const children = new Children();
  const { index, offset } = design.sources.locate(primitive.nameStart);
  recording.at(index, offset);
  const first = recording.declare(primitive.ports.length);
  const reduced = withoutTied(primitive, ties);
  const inputs = reduced.kept.map((input) => netId(first + 1 + input));
  let remark = lowerPrimitive(design, reduced.primitive, recording, first, inputs);
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
    ...(remark !== undefined && {
      whenUsed: () => {
        if (remark === undefined) return;
        const { code, message } = remark;
        remark = undefined;
        design.diagnostics.add(code, message, design.wordSpan(primitive.nameStart));
      },
    }),
  };
}
