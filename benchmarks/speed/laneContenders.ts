import { compile, type Design } from '../../compiler/compile.js';
import { compileLanes } from '../../compiler/compileLanes.js';
import type { Emitter } from '../../compiler/emit/emitter.js';
import { vectorWords } from '../../compiler/native/cWords.js';
import { emitC } from '../../compiler/native/emitC.js';
import { findCompiler } from '../../compiler/native/findCompiler.js';
import { NativeProgram } from '../../compiler/native/runC.js';
import { LaneEngine } from '../../runtime/laneEngine.js';
import type { LaneCount } from '../../runtime/laneLayout.js';
import { LaneRows, randomLaneStimulus } from '../../runtime/laneRows.js';
import { rowStride } from '../../runtime/layout.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import type { Timed } from './bestOf.js';

/** Rows that lanes run over and over: few, since those of a wide circuit fill a cache. */
const LANE_ROWS = 16;

const ROWS = 512;

/** One way to run a circuit. */
export interface Contender extends Timed {
  /** Lane rows of the response to the first rows from power-up 0; empty where rows are packed. */
  readonly response: Uint32Array;
}

/** Generated code for one sequence, with rows brought into and out of the module. */
export async function compiledSingle(design: Design, emitter: Emitter): Promise<Contender> {
  const { inputs, outputs, threeValued } = design.layout;
  const engine = await WasmEngine.create(await compile(design, emitter));
  const stride = rowStride(inputs, threeValued);
  const rows = new Uint32Array(ROWS * stride);
  fillRandomRows(new RandomBits(1), inputs, rows, ROWS, stride);
  const response = new Uint32Array(ROWS * rowStride(outputs, threeValued));
  const run = (cycles: number): void => engine.run(cycles, rows, stride, response);
  return { response: new Uint32Array(0), time: (cycles) => timed(cycles, ROWS, run) };
}

/** Generated code for lanes, with rows where the module reads and writes them. */
export async function compiledLanes(
  design: Design,
  lanes: LaneCount,
  emitter: Emitter,
): Promise<Contender> {
  const engine = await LaneEngine.create(await compileLanes(design, lanes, emitter));
  const rows = Math.min(LANE_ROWS, engine.rows);
  const stimulus = laneStimulus(design, lanes, rows);
  const run = (cycles: number): void => {
    for (let done = 0; done < cycles; done += rows) engine.runInPlace(rows);
  };
  engine.stimulusRows.set(stimulus);
  engine.runInPlace(rows);
  const { outputs, threeValued } = design.layout;
  const { stride } = new LaneRows(outputs, threeValued, lanes);
  return {
    response: engine.responseRows.slice(0, rows * stride),
    time: (cycles) => timed(cycles, rows, run),
  };
}

/** C on vectors of 16 bytes; undefined where a cycle is more than one step in C. */
export async function nativeVectors(
  design: Design,
): Promise<(Contender & { close(): void }) | undefined> {
  const found = findCompiler();
  const emitted = emitC(design, new Uint8Array(design.layout.stateNames.length), vectorWords);
  if ('missing' in found || 'obstacle' in emitted) return undefined;
  const stimulus = laneStimulus(design, 128, LANE_ROWS);
  const rows = { stimulus, count: LANE_ROWS };
  const program = await NativeProgram.build(emitted.text, found.command, rows, ['-march=native']);
  return {
    response: await program.respond(),
    time: async (cycles) => (await program.time(cycles)) / cycles,
    close: () => program.close(),
  };
}

function laneStimulus(design: Design, lanes: LaneCount, cycles: number): Uint32Array {
  const { inputs, threeValued } = design.layout;
  const { stride } = new LaneRows(inputs, threeValued, lanes);
  const rows = new Uint32Array(cycles * stride);
  let at = 0;
  for (const block of randomLaneStimulus(design.layout, lanes, 1, cycles)) {
    rows.set(block.rows, at);
    at += block.rows.length;
  }
  return rows;
}

// Runs whole passes over the rows, as many as make about so many cycles.
function timed(cycles: number, rows: number, run: (cycles: number) => void): number {
  const passes = Math.max(1, Math.round(cycles / rows));
  const start = performance.now();
  for (let i = 0; i < passes; i++) run(rows);
  return ((performance.now() - start) * 1e6) / (passes * rows);
}
