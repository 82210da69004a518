import type { Engine } from '../../runtime/engine.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import { type Design, packedProgramsOf, programsOf } from '../compile.js';
import { emitModel, loadBinaryen } from '../emit/emitModel.js';
import { BytecodeEngine } from '../interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../interpret/reference/referenceEngine.js';
import type { BenchEngine, CodeFigures } from './benchResult.js';
import type { BenchRows } from './benchRows.js';

/** An engine as the measurement sees it. */
export interface Contestant {
  readonly name: BenchEngine;
  readonly buildMs: number;
  /**
   * Starts at power-up and runs the rows, piece by piece, until `limitMs` are over or none is
   * left; returns the packed response to those that were run, at least one.
   */
  respond(limitMs: number): Promise<Uint32Array>;
  /** Nanoseconds that a number of cycles takes, going on from wherever it stands. */
  time(cycles: number): Promise<number>;
}

/** The engines that run inside this process, generated code first, and how much of it there is. */
export interface OwnEngines {
  readonly contestants: readonly Contestant[];
  readonly code: Pick<CodeFigures, 'operations' | 'vectorOperations' | 'bytes'>;
  /** Nanoseconds a cycle of generated code in its best burst, with each row held for some cycles. */
  heldNs(): number;
}

/** Bursts with rows held, and how long each lasts. */
const HELD_BURSTS = 40;
const HELD_BURST_NS = 1e6;

/** Builds the engines that run inside this process. */
export async function ownEngines(design: Design, rows: BenchRows): Promise<OwnEngines> {
  // Loading the library is no part of compiling, and takes longer than most circuits.
  const binaryen = await loadBinaryen();
  const wasm = await timed(() => compiled(binaryen, design, rows.state));
  const table = await tableEngine(wasm.made.model, rows);
  const start = performance.now();
  const programs = programsOf(design);
  const passesMs = performance.now() - start;
  const bytecode = await timed(() => new BytecodeEngine(programs, design.layout));
  const reference = await timed(() => new ReferenceEngine(design.circuit, design));
  const contestants = [
    contestant('wasm', wasm.made.engine, wasm.ms, rows),
    ...(table ? [contestant('table', table, wasm.ms, rows)] : []),
    contestant('bytecode', bytecode.made, passesMs + bytecode.ms, rows),
    contestant('reference', reference.made, reference.ms, rows),
  ];
  const heldNs = (): number => bestHeld(wasm.made.engine, rows);
  return { contestants, code: wasm.made.code, heldNs };
}

function bestHeld(engine: Engine, rows: BenchRows): number {
  let best = Number.POSITIVE_INFINITY;
  for (let burst = 0, cycles = 1000; burst < HELD_BURSTS; burst++) {
    best = Math.min(best, rows.timeHeld(engine, cycles) / cycles);
    cycles = Math.max(1, Math.round(HELD_BURST_NS / best));
  }
  return best;
}

/** Straight-line code alone: the table is an engine of its own here. */
async function compiled(
  binaryen: Awaited<ReturnType<typeof loadBinaryen>>,
  design: Design,
  start: Uint8Array,
) {
  const programs = packedProgramsOf(design, start);
  const model = { ...emitModel(binaryen, programs, design.layout), start };
  const code = {
    operations: sum(programs.programs.map(({ op }) => op.length)),
    vectorOperations: sum(programs.programs.map(({ vectors }) => vectors?.steps.length ?? 0)),
    bytes: model.bytes.length,
  };
  return { model, code, engine: await WasmEngine.create(model, undefined, { usesTable: false }) };
}

/** Cycles after which an engine has found out whether a table is worth it. */
const TRIAL_CYCLES = 1 << 18;

// The engine that anyone gets, where it has come to run by table.
async function tableEngine(model: WasmModel, rows: BenchRows): Promise<WasmEngine | undefined> {
  const engine = await WasmEngine.create(model);
  if (!engine.runsByTable) return undefined;
  rows.time(engine, TRIAL_CYCLES);
  return engine.runsByTable ? engine : undefined;
}

async function timed<T>(make: () => T | Promise<T>): Promise<{ made: T; ms: number }> {
  const start = performance.now();
  const made = await make();
  return { made, ms: performance.now() - start };
}

const sum = (counts: readonly number[]): number => counts.reduce((so, count) => so + count, 0);

function contestant(
  name: BenchEngine,
  engine: Engine,
  buildMs: number,
  rows: BenchRows,
): Contestant {
  return {
    name,
    buildMs,
    respond: async (limitMs) => respond(engine, rows, limitMs),
    time: async (cycles) => rows.time(engine, cycles),
  };
}

function respond(engine: Engine, rows: BenchRows, limitMs: number): Uint32Array {
  const start = performance.now();
  const parts: Uint32Array[] = [];
  engine.reset(rows.state);
  let done = 0;
  while (done < rows.count && (done === 0 || performance.now() - start < limitMs)) {
    // As many again as before: a slow engine notices the limit soon, a fast one runs long pieces.
    const piece = Math.min(Math.max(1, done), rows.count - done);
    parts.push(rows.play(engine, done, piece).slice());
    done += piece;
  }
  return joined(parts);
}

function joined(parts: readonly Uint32Array[]): Uint32Array {
  const whole = new Uint32Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}
