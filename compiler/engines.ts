import type { Engine } from '../runtime/engine.js';
import { WasmEngine } from '../runtime/wasmEngine.js';
import { compile, type Design, programsOf } from './compile.js';
import type { Emitter } from './emit/emitter.js';
import { BytecodeEngine } from './interpret/bytecodeEngine.js';
import { ReferenceEngine } from './interpret/reference/referenceEngine.js';

/** The engines by name: generated code, the levelized and the event-driven interpreter. */
export const engineNames = ['wasm', 'bytecode', 'reference'] as const;

/** One of `engineNames`. */
export type EngineName = (typeof engineNames)[number];

/** Makes an engine for a design. `emitter` may have been started before, to be ready. */
export async function createEngine(
  design: Design,
  name: EngineName,
  emitter?: Emitter,
): Promise<Engine> {
  switch (name) {
    case 'wasm':
      return WasmEngine.create(await compile(design, emitter));
    case 'bytecode':
      return new BytecodeEngine(programsOf(design), design.layout);
    case 'reference':
      return new ReferenceEngine(design.circuit, design);
  }
}
