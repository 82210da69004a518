// Brings a netlist to code with the built library, once, and prints what each stage took as JSON:
// `node growthOnce.mjs PACKS FILE...`, where PACKS is 1 or, without `packWords`, 0.

import { readFileSync } from 'node:fs';
import { isGate } from '../../dist/compiler/circuit/gates.js';
import { designOf, packedProgramsOf } from '../../dist/compiler/compile.js';
import { Diagnostics } from '../../dist/compiler/diagnostics/diagnostics.js';
import { Source } from '../../dist/compiler/diagnostics/source.js';
import { emitModel, loadBinaryen } from '../../dist/compiler/emit/emitModel.js';
import { readNetlist } from '../../dist/compiler/read/readNetlist.js';
import { includeReader } from '../../dist/compiler/read/verilog/includes.js';
import { BenchRows } from '../../dist/compiler/report/benchRows.js';
import { WasmEngine } from '../../dist/runtime/wasmEngine.js';

const BURST_MS = 5;
/** Bursts go on for so long, and again as long as that has brought more than a little. */
const ROUND_MS = 4000;
const GAIN = 0.97;
const MOST_ROUNDS = 20;

const [packs, ...files] = process.argv.slice(2);
const passes = packs === '1' ? {} : { packWords: false };
const wasm = await loadBinaryen();
const seconds = {};

async function stage(name, work) {
  const start = performance.now();
  const made = await work();
  seconds[name] = Number(((performance.now() - start) / 1000).toPrecision(3));
  return made;
}

const diagnostics = new Diagnostics();
const circuit = await stage('read', () =>
  readNetlist(
    files.map((file) => new Source(file, readFileSync(file))),
    { readInclude: includeReader([], readFileSync) },
    diagnostics,
  ),
);
diagnostics.throwIfErrors();
const design = designOf(circuit);
const rows = new BenchRows(design);
const programs = await stage('passes', () => packedProgramsOf(design, rows.state, passes));
const model = await stage('emit', () => emitModel(wasm, programs, design.layout));
const module = await stage('compile', () => WebAssembly.compile(model.bytes));
const engine = await WasmEngine.create({ ...model, start: rows.state }, module, {
  usesTable: false,
});
await stage('firstCycle', () => rows.time(engine, 1));

// Bursts long beside a clock's resolution; the best of them is the least disturbed one. A large
// module has many functions, which an engine optimizes one by one, each when it has run often.
let best = Number.POSITIVE_INFINITY;
for (let round = 0; round < MOST_ROUNDS; round++) {
  const before = best;
  const end = performance.now() + ROUND_MS;
  while (performance.now() < end) {
    const cycles = Math.max(1, Math.min(100_000, Math.round((BURST_MS * 1e6) / best)));
    best = Math.min(best, rows.time(engine, cycles) / cycles);
    await new Promise((resolve) => setTimeout(resolve, 1));
  }
  if (best > before * GAIN) break;
}

const [program] = programs.programs;
const result = {
  gates: circuit.kind.filter(isGate).length,
  registers: circuit.registers.count,
  operations: program.op.length,
  vectorOperations: program.vectors?.steps.length ?? 0,
  bytes: model.bytes.length,
  areaBytes: model.memory.areas[1] - model.memory.areas[0],
  seconds,
  nsPerCycle: Number(best.toPrecision(4)),
};
process.stdout.write(JSON.stringify(result));
