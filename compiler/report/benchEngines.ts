import type { Engine } from '../../runtime/engine.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { type Design, programsOf } from '../compile.js';
import { emitModel, loadBinaryen } from '../emit/emitModel.js';
import { BytecodeEngine } from '../interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../interpret/reference/referenceEngine.js';
import type { BenchEngine } from './benchResult.js';
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

/** Builds the engines that run inside this process, generated code first. */
export async function interpreters(design: Design, rows: BenchRows): Promise<Contestant[]> {
  // Loading the library is no part of compiling, and takes longer than most circuits.
  const binaryen = await loadBinaryen();
  const start = performance.now();
  const programs = programsOf(design);
  const passesMs = performance.now() - start;
  const wasm = await timed(() => WasmEngine.create(emitModel(binaryen, programs, design.layout)));
  const bytecode = await timed(() => new BytecodeEngine(programs, design.layout));
  const reference = await timed(() => new ReferenceEngine(design.circuit, design));
  return [
    contestant('wasm', wasm.engine, passesMs + wasm.ms, rows),
    contestant('bytecode', bytecode.engine, passesMs + bytecode.ms, rows),
    contestant('reference', reference.engine, reference.ms, rows),
  ];
}

async function timed(
  make: () => Engine | Promise<Engine>,
): Promise<{ engine: Engine; ms: number }> {
  const start = performance.now();
  const engine = await make();
  return { engine, ms: performance.now() - start };
}

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
