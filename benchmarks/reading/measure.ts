import { existsSync, mkdirSync, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { libraryFiles } from '../circuits/cells/libraryFiles.js';
import { primitivesFile, verilogFile } from '../circuits/cells/verilog/library.js';
import { builtCommand, readApart, runCommand } from './children.js';
import { flatNetlist, instanceLimits } from './netlist.js';
import { pageOf, type ReadingResult } from './results.js';

/**
 * Measures how fast a large flat netlist is read, inspected and run for a cycle, each in a process
 * of its own, and writes `benchmarks/results/reading.json` and `reading.md`.
 *
 *   npm run build && npx tsx benchmarks/reading/measure.ts [INSTANCES]
 */

const readings = 5;
const results = fileURLToPath(new URL('../results/', import.meta.url));
const instances = Number(process.argv[2] ?? 1_000_000);
const { least, most } = instanceLimits;

if (!Number.isInteger(instances) || instances < least || instances > most) {
  fail(`expected a number of instances from ${least} to ${most}, got ${process.argv[2]}`);
} else if (!existsSync(builtCommand)) {
  fail('there is no built command; run npm run build first');
} else {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-reading-'));
  try {
    write(await measure(folder));
  } finally {
    rmSync(folder, { recursive: true });
  }
}

async function measure(folder: string): Promise<ReadingResult> {
  const load = loadavg()[0]!;
  say(`writing a netlist of ${instances} instances`);
  const files = await writeFiles(folder);
  const bytes = [...files, join(folder, primitivesFile)]
    .map((file) => statSync(file).size)
    .reduce((sum, size) => sum + size);
  const all: Awaited<ReturnType<typeof readApart>>[] = [];
  for (let i = 1; i <= readings; i++) {
    say(`reading it, ${i} of ${readings}`);
    all.push(await readApart(files));
  }
  const best = (figureOf: (reading: (typeof all)[number]) => number): number =>
    Math.min(...all.map(figureOf));
  const seconds = best((each) => each.seconds);
  const processorSeconds = best((each) => each.processorSeconds);
  const peakBytes = best((each) => each.used.peakBytes);
  say('inspecting it');
  const inspect = await runCommand('inspect', ...files);
  say('running one cycle');
  const response = join(folder, 'response.csv');
  const request = ['--random', '1', '--cycles', '1', '--response', response];
  const run = ['run', ...files, ...request, '--no-cache'];
  const firstResponse = await runCommand(...run);
  const { nets, registers } = all[0]!;
  return {
    machine: {
      processor: cpus()[0]?.model,
      cores: cpus().length,
      node: process.version,
      load,
    },
    command: `npm run build && npx tsx benchmarks/reading/measure.ts ${instances}`,
    netlist: { instances, bytes, nets, registers },
    reading: {
      readings,
      seconds,
      processorSeconds,
      megabytesPerSecond: bytes / 1e6 / seconds,
      megabytesPerProcessorSecond: bytes / 1e6 / processorSeconds,
      peakBytes,
      memoryPerText: peakBytes / bytes,
    },
    inspect,
    firstResponse,
  };
}

/** Writes the netlist and its cell library; returns the files that a command names. */
async function writeFiles(folder: string): Promise<string[]> {
  const netlist = join(folder, 'flat.v');
  const file = await open(netlist, 'w');
  for (const chunk of flatNetlist(instances)) await file.writeFile(chunk);
  await file.close();
  for (const { name, chunks } of libraryFiles) {
    if (name === verilogFile || name === primitivesFile) {
      writeFileSync(join(folder, name), [...chunks()].join(''));
    }
  }
  return [netlist, join(folder, verilogFile)];
}

function write(result: ReadingResult): void {
  mkdirSync(results, { recursive: true });
  writeFileSync(join(results, 'reading.json'), `${JSON.stringify(result, null, 2)}\n`);
  const page = pageOf(result);
  writeFileSync(join(results, 'reading.md'), page);
  process.stdout.write(page);
}

function say(what: string): void {
  process.stderr.write(`${what}\n`);
}

function fail(message: string): void {
  say(message);
  process.exitCode = 2;
}
