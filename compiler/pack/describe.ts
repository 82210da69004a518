import { basename } from 'node:path';
import {
  DESCRIPTION_FORMAT,
  DESCRIPTION_SECTION,
  type ModelDescription,
  PROBES_SECTION,
} from '../../runtime/model/description.js';
import { folded } from '../../runtime/model/tables.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import type { Circuit } from '../circuit/circuit.js';
import { powerUpState } from '../circuit/powerUp.js';
import { X } from '../circuit/values.js';
import { compile, type Design } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import { keptMemories } from './keptMemories.js';
import type { KeptNets } from './keptNets.js';
import { compileProbes } from './probes.js';
import { withSections } from './wasmSections.js';

/** Compiles a design to the bytes of `model.wasm`, with its description inside. */
export async function packedModule(
  design: Design,
  { nets, probes }: KeptNets,
  netlist: string,
  emitter: Emitter,
): Promise<Uint8Array<ArrayBuffer>> {
  const { bytes, ...model } = await compile(design, emitter);
  const probing = probes.length > 0 ? await compileProbes(design, probes, emitter) : undefined;
  const description: ModelDescription = {
    format: DESCRIPTION_FORMAT,
    netlist,
    lanes: 1,
    model: withoutFolders(model, design.circuit),
    initial: initialOf(design.circuit),
    patternLength: design.schedule.pattern.length,
    nets,
    memories: keptMemories(design),
    ...(probing && { probes: withoutFolders(withoutBytes(probing), design.circuit) }),
  };
  const text = new TextEncoder().encode(JSON.stringify(folded(description)));
  return withSections(bytes, [
    [DESCRIPTION_SECTION, text],
    ...(probing ? [[PROBES_SECTION, probing.bytes] as const] : []),
  ]);
}

function initialOf(circuit: Circuit): string {
  const state = powerUpState(circuit, 'unknown');
  return Array.from(state, (value) => (value === X ? 'x' : value)).join('');
}

function withoutBytes({ bytes: _, ...model }: WasmModel): Omit<WasmModel, 'bytes'> {
  return model;
}

// Where files stood on the machine that packed them is nobody's business.
function withoutFolders(
  model: Omit<WasmModel, 'bytes'>,
  { sources }: Circuit,
): Omit<WasmModel, 'bytes'> {
  const short = (text: string): string =>
    sources.reduce((so, { path }) => so.replaceAll(path, basename(path)), text);
  const faults = model.faults.map((fault) => ({
    ...fault,
    message: short(fault.message),
    place: short(fault.place),
  }));
  return { ...model, faults };
}
