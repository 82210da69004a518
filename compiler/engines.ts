import type { Engine, MarkingEngine } from '../runtime/engine.js';
import { WasmEngine } from '../runtime/wasmEngine.js';
import { compile, type Design, programsOf } from './compile.js';
import type { Emitter } from './emit/emitter.js';
import { BytecodeEngine } from './interpret/bytecodeEngine.js';
import { ReferenceEngine } from './interpret/reference/referenceEngine.js';
import { SteppedEngine } from './interpret/steppedEngine.js';

/** The engines by name: generated code, the levelized and the event-driven interpreter. */
export const engineNames = ['wasm', 'bytecode', 'reference'] as const;

/** One of `engineNames`. */
export type EngineName = (typeof engineNames)[number];

/**
 * Makes an engine for a design. `emitter` may have been started before, to be ready. With `start`,
 * the engine is for runs from that state alone, which can make it faster: see `ModelOptions`.
 */
export async function createEngine(
  design: Design,
  name: EngineName,
  emitter?: Emitter,
  start?: Uint8Array,
): Promise<Engine> {
  switch (name) {
    case 'wasm':
      return WasmEngine.create(await compile(design, emitter, start && { start }));
    case 'bytecode':
      return new BytecodeEngine(programsOf(design), design.layout);
    case 'reference':
      return new ReferenceEngine(design.circuit, design);
  }
}

/** Makes an engine that notices when a state comes again; generated code does so at speed. */
export async function createMarkingEngine(
  design: Design,
  name: EngineName,
  emitter?: Emitter,
  start?: Uint8Array,
): Promise<MarkingEngine> {
  if (name !== 'wasm') return new SteppedEngine(await createEngine(design, name));
  const options = { comparesState: true, ...(start && { start }) };
  return WasmEngine.create(await compile(design, emitter, options));
}
