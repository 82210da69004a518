import type { Engine } from '../../runtime/engine.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import { type BackgroundCompiler, isBackground } from '../background/compileThread.js';
import { StartingEngine } from '../background/startingEngine.js';
import type { ModelCache } from '../cache/modelCache.js';
import { cyclesOf, type Design, type DesignCycles, quickProgramsOf } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import { createEngine, createMarkingEngine, type EngineName } from '../engines.js';
import { BytecodeEngine } from '../interpret/bytecodeEngine.js';

/**
 * Cycles of a run that is over sooner when it is interpreted than a compiler is ready, however large
 * the circuit: a cycle takes the interpreter 1 to 10 ns a gate, and the passes take 20 to 30 us a gate.
 */
const SHORT_CYCLES = 1000;

/** Whether a run of so many cycles, if that is known, should not be compiled for. */
export const isShort = (cycles: number | undefined): boolean =>
  cycles !== undefined && cycles <= SHORT_CYCLES;

/** What decides about the engine of a run. */
export interface EngineWish {
  readonly engine: EngineName;
  /** It must notice when a state comes again. */
  readonly marks: boolean;
  /** The state elements that the run starts with, see `ModelOptions`. */
  readonly start: Uint8Array;
  /** How long the run will be, if that is known. */
  readonly cycles?: number;
  /** Started before, to be ready. */
  readonly emitter?: Emitter;
  /** Models of the circuit, its outputs apart, that were compiled before. */
  readonly models?: ModelCache;
}

/**
 * Makes the engine of a run. Generated code that a thread has to compile is not waited for: the
 * first cycles are interpreted meanwhile, and all cycles of a short run.
 */
export async function runEngine(design: Design, wish: EngineWish): Promise<Engine> {
  const { engine, marks, start, emitter, models } = wish;
  if (marks) return createMarkingEngine(design, engine, emitter, start);
  if (engine !== 'wasm' || emitter === undefined || !isBackground(emitter)) {
    return createEngine(design, engine, emitter, start);
  }
  const known = models?.find(design, { start });
  if (known !== undefined) return WasmEngine.create(known);
  if (isShort(wish.cycles)) return interpreted(design, cyclesOf(design));
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
  return new StartingEngine(interpreted(design, cycles), faster);
}

const interpreted = ({ layout }: Design, cycles: DesignCycles): BytecodeEngine =>
  new BytecodeEngine(quickProgramsOf(cycles), layout);
