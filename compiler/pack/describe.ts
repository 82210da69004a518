import { basename } from 'node:path';
import type { Fault } from '../../runtime/engine.js';
import type { LaneCount } from '../../runtime/laneLayout.js';
import {
  DESCRIPTION_FORMAT,
  DESCRIPTION_SECTION,
  type Description,
  PROBES_SECTION,
} from '../../runtime/model/description.js';
import { folded } from '../../runtime/model/tables.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import type { Circuit } from '../circuit/circuit.js';
import { powerUpState } from '../circuit/powerUp.js';
import { X } from '../circuit/values.js';
import { compile, type Design } from '../compile.js';
import { compileLanes } from '../compileLanes.js';
import type { Emitter } from '../emit/emitter.js';
import { keptMemories } from './keptMemories.js';
import type { KeptNets } from './keptNets.js';
import { compileProbes } from './probes.js';
import { withSections } from './wasmSections.js';

/** The bytes of `model.wasm`, and whether a cycle may have no result. */
export interface PackedModule {
  readonly module: Uint8Array<ArrayBuffer>;
  readonly mayEnd: boolean;
}

/**
 * Compiles a design to the bytes of `model.wasm`, with its description inside. Throws RangeError for
 * many lanes of a circuit with memories.
 */
export async function packedModule(
  design: Design,
  { nets, probes }: KeptNets,
  netlist: string,
  lanes: 1 | LaneCount,
  emitter: Emitter,
): Promise<PackedModule> {
  const { bytes, ...model } =
    lanes === 1 ? await compile(design, emitter) : await compileLanes(design, lanes, emitter);
  const probing = probes.length > 0 ? await compileProbes(design, probes, emitter) : undefined;
  const description: Description = {
    format: DESCRIPTION_FORMAT,
    netlist,
    lanes,
    model: withoutFolders(model, design.circuit),
    initial: initialOf(design.circuit),
    patternLength: design.schedule.pattern.length,
    nets,
    memories: keptMemories(design),
    ...(probing && { probes: withoutFolders(withoutBytes(probing), design.circuit) }),
  };
  const text = new TextEncoder().encode(JSON.stringify(folded(description)));
  const module = withSections(bytes, [
    [DESCRIPTION_SECTION, text],
    ...(probing ? [[PROBES_SECTION, probing.bytes] as const] : []),
  ]);
  return { module, mayEnd: model.faults.flat().length > 0 };
}

function initialOf(circuit: Circuit): string {
  const state = powerUpState(circuit, 'unknown');
  return Array.from(state, (value) => (value === X ? 'x' : value)).join('');
}

function withoutBytes({ bytes: _, ...model }: WasmModel): Omit<WasmModel, 'bytes'> {
  return model;
}

// Where files stood on the machine that packed them is nobody's business.
function withoutFolders<M extends { readonly faults: Faults }>(model: M, { sources }: Circuit): M {
  const short = (text: string): string =>
    sources.reduce((so, { path }) => so.replaceAll(path, basename(path)), text);
  const shortened = (faults: Faults): Faults =>
    faults.map((fault) =>
      'message' in fault
        ? { ...fault, message: short(fault.message), place: short(fault.place) }
        : (shortened(fault) as readonly Fault[]),
    );
  return { ...model, faults: shortened(model.faults) };
}

/** Of a model, or of each kind of cycle of a lane model. */
type Faults = readonly (Fault | readonly Fault[])[];
