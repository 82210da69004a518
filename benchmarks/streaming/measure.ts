import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import { builtCommand, runCommand, type Used } from '../reading/children.js';
import { writeInputs } from './inputs.js';
import { pageOf, type StreamingFigure, type StreamingResult } from './results.js';

/**
 * Measures how fast stimuli, responses and expectations of all forms stream through `run`, and
 * writes `benchmarks/results/streaming.json` and `streaming.md`.
 *
 *   npm run build && npx tsx benchmarks/streaming/measure.ts
 */

const rounds = 5;
const results = fileURLToPath(new URL('../results/', import.meta.url));

/** Millions of cycles that each way is measured with: enough for a second or so. */
const tables = 2;
const fast = 20;

/** What is measured: a name, millions of cycles, and options of `run`; a response file is made anew. */
const ways: readonly (readonly [name: string, millions: number, options: string])[] = [
  ['nothing but the circuit', fast, 'word.v --random 1'],
  ['CSV in and out, a column of 32 bits', tables, 'word.v --stimulus word.csv --response out.csv'],
  ['CSV in and out, 32 columns of a bit', tables, 'bits.v --stimulus bits.csv --response out.csv'],
  ['CSV in, compared with CSV', tables, 'word.v --stimulus word.csv --expect want.csv'],
  ['compressed CSV in and out', tables, 'word.v --stimulus word.csv.gz --response out.csv.gz'],
  ['value change dump in', tables, 'word.v --stimulus word.vcd'],
  ['module in, a row at a time', tables, 'word.v --stimulus values.mjs'],
  ['module in that looks back', 1, 'word.v --stimulus reacting.mjs'],
  ['module in, blocks of packed rows', fast, 'word.v --stimulus blocks.mjs'],
  ['packed rows in', fast, 'word.v --stimulus word.rows'],
  ['packed rows in and out', fast, 'word.v --stimulus word.rows --response out.rows'],
  [
    'packed rows in, compared with packed rows',
    fast,
    'word.v --stimulus word.rows --expect want.rows',
  ],
  ['compared with a module', fast, 'word.v --random 1 --expect-model model.mjs'],
  ['compared with a netlist', fast, 'word.v --random 1 --expect-netlist word.v'],
  [
    'one bit of every 64th cycle out',
    fast,
    'word.v --random 1 --response out.csv --ports total[0] --every 64',
  ],
];

if (!existsSync(builtCommand)) {
  process.stderr.write('there is no built command; run npm run build first\n');
  process.exitCode = 2;
} else {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-streaming-'));
  try {
    process.chdir(folder);
    write(await measure(folder));
  } finally {
    process.chdir(tmpdir());
    rmSync(folder, { recursive: true });
  }
}

async function measure(folder: string): Promise<StreamingResult> {
  const load = loadavg()[0]!;
  say('writing stimuli');
  writeInputs(folder, tables * 1e6);
  await prepare();
  const figures: StreamingFigure[] = [];
  for (const [name, millions, options] of ways) {
    say(name);
    const cycles = millions * 1e6;
    const words = options.split(' ');
    const start = await best(words, 1);
    const whole = await best(words, cycles);
    const seconds = whole.seconds - start.seconds;
    const processorSeconds = whole.processorSeconds - start.processorSeconds;
    figures.push({ name, options, cycles, seconds, processorSeconds, peakBytes: whole.peakBytes });
  }
  const machine = {
    processor: cpus()[0]?.model,
    cores: cpus().length,
    node: process.version,
    load,
  };
  const command = 'npm run build && npx tsx benchmarks/streaming/measure.ts';
  return { machine, command, rounds, figures };
}

// Files of other forms are made by the command itself.
async function prepare(): Promise<void> {
  writeFileSync('word.csv.gz', gzipSync(readFileSync('word.csv')));
  await runCommand(...run('source.v --random 1 --response word.rows'.split(' '), fast * 1e6));
  await runCommand(
    ...run('word.v --stimulus word.csv --response want.csv'.split(' '), tables * 1e6),
  );
  await runCommand(
    ...run('word.v --stimulus word.rows --response want.rows'.split(' '), fast * 1e6),
  );
}

function run(words: readonly string[], cycles: number): string[] {
  return ['run', ...words, '--cycles', `${cycles}`];
}

/** The run that took the least time of the processor: other jobs on the machine only add to it. */
async function best(words: readonly string[], cycles: number): Promise<Used> {
  const all: Used[] = [];
  for (let i = 0; i < rounds; i++) all.push(await runCommand(...run(words, cycles)));
  return {
    seconds: Math.min(...all.map(({ seconds }) => seconds)),
    processorSeconds: Math.min(...all.map(({ processorSeconds }) => processorSeconds)),
    peakBytes: Math.max(...all.map(({ peakBytes }) => peakBytes)),
  };
}

function write(result: StreamingResult): void {
  writeFileSync(join(results, 'streaming.json'), `${JSON.stringify(result, null, 2)}\n`);
  const page = pageOf(result);
  writeFileSync(join(results, 'streaming.md'), page);
  process.stdout.write(page);
}

function say(what: string): void {
  process.stderr.write(`${what}\n`);
}
