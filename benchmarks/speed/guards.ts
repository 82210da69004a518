import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { basename } from 'node:path';
import { fileURLToPath } from 'node:url';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf, packedProgramsOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { emitModel, loadBinaryen } from '../../compiler/emit/emitModel.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { thisMachine } from '../../compiler/report/bench/machine.js';
import { rowStride } from '../../runtime/layout.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { circuits } from '../circuits/index.js';
import { bestOf } from './bestOf.js';
import { isBusy } from './busy.js';
import { type GuardFigures, type Guards, pageOf } from './guardsPage.js';
import { heldRows, type Stimulus, sleeper, stimuliOf } from './guardsStimuli.js';

/**
 * Measures what it gains to pass over what does not change: inputs that change in every cycle and
 * inputs that are held, on code with and without guards, in turn. Writes
 * `benchmarks/results/guards.json` and `guards.md`.
 *
 *   npx tsx benchmarks/speed/guards.ts [SECONDS] [CIRCUIT...]
 *
 * SECONDS are spent on each figure (default 0.5). Files are only written if all circuits are run,
 * and not where the machine has too much else to do for times to say anything.
 */

const results = fileURLToPath(new URL('../results/', import.meta.url));
const published = fileURLToPath(new URL('../../../shared/circuits/', import.meta.url));

const allNames = ['s5378', 's13207.1', 's35932', 'uart', 'sha256', 'aes128', 'aes128 cores=4'];
allNames.push('sleeper');

const wasm = await loadBinaryen();

function sourceOf(name: string): Source | undefined {
  if (name === 'sleeper') return new Source('sleeper.v', sleeper);
  const [kind, parameter] = name.split(' ');
  const own = circuits.find((circuit) => circuit.name === kind);
  if (own !== undefined) {
    const [key, value] = parameter?.split('=') ?? [];
    const given = key === undefined ? {} : { [key]: Number(value) };
    return new Source(`${kind}.v`, [...own.write(given)].join(''));
  }
  const file = `${published}${name}.bench`;
  return existsSync(file) ? new Source(basename(file), readFileSync(file)) : undefined;
}

/** Two engines of a design, with guards and without, and the count of cycles passed over. */
async function enginesOf(design: Design, start: Uint8Array) {
  const make = async (guards: boolean): Promise<WasmEngine> => {
    const passes = { guards, tables: false };
    const programs = packedProgramsOf(design, start, passes);
    const model = { ...emitModel(wasm, programs, design.layout, { passes }), start };
    return WasmEngine.create(model);
  };
  return { plain: await make(false), guarded: await make(true) };
}

async function measure(
  name: string,
  design: Design,
  { plain, guarded }: { plain: WasmEngine; guarded: WasmEngine },
  stimulus: Stimulus,
  seconds: number,
): Promise<GuardFigures> {
  const { layout } = design;
  const stride = rowStride(layout.inputs, layout.threeValued);
  const { rows, count } = heldRows(layout, stimulus);
  const words = count * rowStride(layout.outputs, layout.threeValued);
  const response = new Uint32Array(words);
  const expected = new Uint32Array(words);
  plain.run(count, rows, stride, expected);
  guarded.run(count, rows, stride, response);
  if (response.some((word, i) => word !== expected[i])) throw new Error(`${name}: not the same`);
  const timed = (engine: WasmEngine) => ({
    time: (cycles: number): number => {
      const start = performance.now();
      const turns = Math.max(1, Math.round(cycles / count));
      for (let turn = 0; turn < turns; turn++) engine.run(count, rows, stride, response);
      return ((performance.now() - start) * 1e6) / (turns * count);
    },
  });
  const times = await bestOf({ plain: timed(plain), guarded: timed(guarded) }, seconds);
  return { stimulus: stimulus.name, plain: times.plain!, guarded: times.guarded! };
}

const [seconds = '0.5', ...names] = process.argv.slice(2);
const machine = thisMachine();
const measured: Guards['circuits'][number][] = [];
for (const name of names.length > 0 ? names : allNames) {
  const source = sourceOf(name);
  if (source === undefined) {
    process.stderr.write(`${name} is not there and not measured\n`);
    continue;
  }
  const design = designOf(readNetlist([source], {}, new Diagnostics())!);
  const start = powerUpState(design.circuit, 'zero');
  const figures: GuardFigures[] = [];
  for (const stimulus of stimuliOf(name)) {
    process.stderr.write(`${name}, ${stimulus.name}\n`);
    const engines = await enginesOf(design, start);
    figures.push(await measure(name, design, engines, stimulus, Number(seconds)));
  }
  measured.push({ circuit: name, figures });
}
const guards: Guards = { machine, seconds: Number(seconds), circuits: measured };
const page = pageOf(guards);
process.stdout.write(page);
if (names.length === 0 && !isBusy(machine)) {
  mkdirSync(results, { recursive: true });
  writeFileSync(`${results}guards.json`, `${JSON.stringify(guards, null, 2)}\n`);
  writeFileSync(`${results}guards.md`, page);
}
