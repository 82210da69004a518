import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { basename } from 'node:path';
import { fileURLToPath } from 'node:url';
import { type Design, designOf, packedProgramsOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { emitModel, loadBinaryen } from '../../compiler/emit/emitModel.js';
import { type PassSwitches, passNames } from '../../compiler/program/switches.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { thisMachine } from '../../compiler/report/bench/machine.js';
import { BenchRows } from '../../compiler/report/benchRows.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { circuits } from '../circuits/index.js';
import { type Ablation, type AblationRow, pageOf, type Setting } from './ablationPage.js';
import { bestOf, type Timed } from './bestOf.js';
import { isBusy } from './busy.js';

/**
 * Measures what each pass gains: generated code with all passes beside code with one of them left
 * out, and functions of other sizes, in turn. Writes `benchmarks/results/ablation.json` and
 * `ablation.md`.
 *
 *   npx tsx benchmarks/speed/ablation.ts [SECONDS] [CIRCUIT...]
 *
 * SECONDS are spent on each figure (default 0.5). Files are only written if all circuits are run,
 * and not where the machine has too much else to do for times to say anything.
 */

const results = fileURLToPath(new URL('../results/', import.meta.url));
const published = fileURLToPath(new URL('../../../shared/circuits/', import.meta.url));

const allNames = ['s298', 's1488', 's5378', 's13207.1', 's35932', 'lock', 'uart', 'counter'];
allNames.push('sha256', 'aes128');

/** Times that all passes are run for one setting: the fastest counts. */
const PASS_RUNS = 5;

/** What is measured beside all passes. The table is another algorithm and has a row of its own. */
const settings: readonly (readonly [name: string, passes: PassSwitches])[] = [
  ['all passes', {}],
  ...passNames
    .filter((name) => name !== 'tables')
    .map((name) => [`without ${name}`, { [name]: false }] as const),
  ['without packWords, groupRegisters', { packWords: false, groupRegisters: false }],
  ['functions up to 300', { blockNodes: 300 }],
  ['functions up to 5,000', { blockNodes: 5000 }],
];

const wasm = await loadBinaryen();

function sourceOf(name: string): Source | undefined {
  const own = circuits.find((circuit) => circuit.name === name);
  if (own !== undefined) return new Source(`${name}.v`, [...own.write()].join(''));
  const file = `${published}${name}.bench`;
  return existsSync(file) ? new Source(basename(file), readFileSync(file)) : undefined;
}

async function measure(name: string, source: Source, seconds: number): Promise<AblationRow> {
  process.stderr.write(`${name}\n`);
  const design = designOf(readNetlist([source], {}, new Diagnostics())!);
  const rows = new BenchRows(design);
  // The passes themselves are slower at first, which would count against the first setting.
  for (let run = 0; run < PASS_RUNS; run++) packedProgramsOf(design, rows.state);
  const built: { readonly name: string; readonly setting: Setting; readonly timed: Timed }[] = [];
  for (const [setting, passes] of settings) {
    const { figures, engine } = await build(design, rows, passes);
    built.push({ name: setting, setting: figures, timed: timedOn(engine, rows) });
  }
  const byTable = (await build(design, rows, {}, true)).engine;
  rows.time(byTable, 1 << 18);
  const contenders: Record<string, Timed> = Object.fromEntries(
    built.map(({ name: setting, timed }) => [setting, timed]),
  );
  if (byTable.runsByTable) contenders['by table'] = timedOn(byTable, rows);
  const times = await bestOf(contenders, seconds);
  return {
    circuit: name,
    settings: built.map(({ name: of, setting }) => ({ of, ...setting, nsPerCycle: times[of]! })),
    ...(byTable.runsByTable && { byTable: times['by table']! }),
  };
}

const timedOn = (engine: WasmEngine, rows: BenchRows): Timed => ({
  time: (cycles) => rows.time(engine, cycles) / cycles,
});

async function build(design: Design, rows: BenchRows, passes: PassSwitches, usesTable = false) {
  let passesMs = Number.POSITIVE_INFINITY;
  let programs = packedProgramsOf(design, rows.state, passes);
  for (let run = 1; run < PASS_RUNS; run++) {
    const start = performance.now();
    programs = packedProgramsOf(design, rows.state, passes);
    passesMs = Math.min(passesMs, performance.now() - start);
  }
  const model = { ...emitModel(wasm, programs, design.layout, { passes }), start: rows.state };
  const [program] = programs.programs;
  const engine = await WasmEngine.create(model, undefined, { usesTable });
  engine.reset(rows.state);
  const figures: Setting = {
    operations: program!.op.length,
    vectorOperations: program!.vectors?.steps.length ?? 0,
    bytes: model.bytes.length,
    passesMs: Number(passesMs.toPrecision(3)),
  };
  return { figures, engine };
}

const [seconds = '0.5', ...names] = process.argv.slice(2);
const machine = thisMachine();
const measured: AblationRow[] = [];
for (const name of names.length > 0 ? names : allNames) {
  const source = sourceOf(name);
  if (source === undefined) process.stderr.write(`${name} is not there and not measured\n`);
  else measured.push(await measure(name, source, Number(seconds)));
}
const ablation: Ablation = { machine, seconds: Number(seconds), circuits: measured };
const page = pageOf(ablation);
process.stdout.write(page);
if (names.length === 0 && !isBusy(machine)) {
  mkdirSync(results, { recursive: true });
  writeFileSync(`${results}ablation.json`, `${JSON.stringify(ablation, null, 2)}\n`);
  writeFileSync(`${results}ablation.md`, page);
}
