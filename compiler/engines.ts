import type binaryen from 'binaryen';
import type { Engine } from '../runtime/engine.js';
import { WasmEngine } from '../runtime/wasmEngine.js';
import { compile, type Design, programOf } from './compile.js';
import { BytecodeEngine } from './interpret/bytecodeEngine.js';
import { ReferenceEngine } from './interpret/reference/referenceEngine.js';

/** The engines by name: generated code, the levelized and the event-driven interpreter. */
export const engineNames = ['wasm', 'bytecode', 'reference'] as const;

/** One of `engineNames`. */
export type EngineName = (typeof engineNames)[number];

/** Makes an engine for a design. `wasm` is Binaryen on its way, if it has been asked for. */
export async function createEngine(
  design: Design,
  name: EngineName,
  wasm?: Promise<typeof binaryen>,
): Promise<Engine> {
  switch (name) {
    case 'wasm':
      return WasmEngine.create(await compile(design, wasm));
    case 'bytecode':
      return new BytecodeEngine(programOf(design), design.layout);
    case 'reference':
      return new ReferenceEngine(design.circuit, design);
  }
}
