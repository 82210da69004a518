import type { Engine } from '../../runtime/engine.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import { type BackgroundCompiler, isBackground } from '../background/compileThread.js';
import { StartingEngine } from '../background/startingEngine.js';
import type { ModelCache } from '../cache/modelCache.js';
import { cyclesOf, type Design, quickProgramsOf } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import { createEngine, createMarkingEngine, type EngineName } from '../engines.js';
import { BytecodeEngine } from '../interpret/bytecodeEngine.js';

/** What decides about the engine of a run. */
export interface EngineWish {
  readonly engine: EngineName;
  /** It must notice when a state comes again. */
  readonly marks: boolean;
  /** The state elements that the run starts with, see `ModelOptions`. */
  readonly start: Uint8Array;
  /** Started before, to be ready. */
  readonly emitter?: Emitter;
  /** Models of the circuit, its outputs apart, that were compiled before. */
  readonly models?: ModelCache;
}

/**
 * Makes the engine of a run. Generated code that a thread has to compile is not waited for: the
 * first cycles are interpreted meanwhile.
 */
export async function runEngine(design: Design, wish: EngineWish): Promise<Engine> {
  const { engine, marks, start, emitter, models } = wish;
  if (marks) return createMarkingEngine(design, engine, emitter, start);
  if (engine !== 'wasm' || emitter === undefined || !isBackground(emitter)) {
    return createEngine(design, engine, emitter, start);
  }
  const known = models?.find(design, { start });
  if (known !== undefined) return WasmEngine.create(known);
  return startingEngine(design, emitter, start, (model) => models?.keep(design, { start }, model));
}

function startingEngine(
  design: Design,
  compiler: BackgroundCompiler,
  start: Uint8Array,
  keep: (model: WasmModel) => void,
): StartingEngine {
  const cycles = cyclesOf(design);
  const compiled = compiler.compile(cycles, design.layout, { start });
  const faster = compiled.then((model) => {
    keep(model);
    return WasmEngine.create(model);
  });
  return new StartingEngine(new BytecodeEngine(quickProgramsOf(cycles), design.layout), faster);
}
