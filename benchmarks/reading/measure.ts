import { existsSync, mkdirSync, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { libraryFiles } from '../circuits/cells/libraryFiles.js';
import { primitivesFile, verilogFile } from '../circuits/cells/verilog/library.js';
import { builtCommand, readApart, runCommand } from './children.js';
import { flatNetlist, instanceLimits } from './netlist.js';
import { pageOf, type ReadingResult, type ShapeResult } from './results.js';
import { type Shape, shapesOf } from './shapes.js';

/**
 * Measures how fast a large flat netlist is read, inspected and run for a cycle, each in a process
 * of its own, and how fast files of other shapes are read; writes `benchmarks/results/reading.json` and `reading.md`.
 *
 *   npm run build && npx tsx benchmarks/reading/measure.ts [INSTANCES [MEGABYTES OF OTHER SHAPES]]
 */

const readings = 5;
const readingsOfShape = 3;
const results = fileURLToPath(new URL('../results/', import.meta.url));
const instances = Number(process.argv[2] ?? 1_000_000);
const megabytes = Number(process.argv[3] ?? 10);
const { least, most } = instanceLimits;

if (!Number.isInteger(instances) || instances < least || instances > most) {
  fail(`expected a number of instances from ${least} to ${most}, got ${process.argv[2]}`);
} else if (!Number.isInteger(megabytes) || megabytes < 1) {
  fail(`expected a whole number of megabytes, got ${process.argv[3]}`);
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
  const bytes = bytesOf([...files, join(folder, primitivesFile)]);
  const { nets, registers, ...best } = await bestReading(files, readings);
  const { seconds, processorSeconds, peakBytes } = best;
  say('inspecting it');
  const inspect = await runCommand('inspect', ...files);
  say('running one cycle');
  const response = join(folder, 'response.csv');
  const request = ['--random', '1', '--cycles', '1', '--response', response];
  const run = ['run', ...files, ...request, '--no-cache'];
  const firstResponse = await runCommand(...run);
  const shapes: ShapeResult[] = [];
  for (const shape of shapesOf(megabytes)) shapes.push(await measureShape(folder, shape));
  return {
    machine: {
      processor: cpus()[0]?.model,
      cores: cpus().length,
      node: process.version,
      load,
    },
    command: `npm run build && npx tsx benchmarks/reading/measure.ts ${instances} ${megabytes}`,
    netlist: { instances, bytes, nets, registers },
    reading: {
      readings,
      ...best,
      megabytesPerSecond: bytes / 1e6 / seconds,
      megabytesPerProcessorSecond: bytes / 1e6 / processorSeconds,
      memoryPerText: peakBytes / bytes,
    },
    shapes,
    inspect,
    firstResponse,
  };
}

/** The best figures of several readings of some files. */
async function bestReading(files: readonly string[], times: number) {
  const all: Awaited<ReturnType<typeof readApart>>[] = [];
  for (let i = 1; i <= times; i++) {
    say(`reading it, ${i} of ${times}`);
    all.push(await readApart(files));
  }
  const best = (figureOf: (reading: (typeof all)[number]) => number): number =>
    Math.min(...all.map(figureOf));
  return {
    nets: all[0]!.nets,
    registers: all[0]!.registers,
    seconds: best((each) => each.seconds),
    processorSeconds: best((each) => each.processorSeconds),
    peakBytes: best((each) => each.used.peakBytes),
  };
}

async function measureShape(folder: string, shape: Shape): Promise<ShapeResult> {
  const { name, usesCells } = shape;
  say(`writing files: ${name}`);
  const files: string[] = [];
  for (const [file, chunks] of shape.files)
    files.push(await writeText(join(folder, file), chunks()));
  const cells = usesCells ? [join(folder, verilogFile)] : [];
  const bytes = bytesOf([...files, ...cells, ...(usesCells ? [join(folder, primitivesFile)] : [])]);
  const { seconds, processorSeconds, peakBytes } = await bestReading(
    [...files, ...cells],
    readingsOfShape,
  );
  return { name, bytes, seconds, processorSeconds, peakBytes };
}

function bytesOf(files: readonly string[]): number {
  return files.reduce((sum, file) => sum + statSync(file).size, 0);
}

async function writeText(path: string, chunks: Iterable<string>): Promise<string> {
  const file = await open(path, 'w');
  for (const chunk of chunks) await file.writeFile(chunk);
  await file.close();
  return path;
}

/** Writes the netlist and its cell library; returns the files that a command names. */
async function writeFiles(folder: string): Promise<string[]> {
  const netlist = await writeText(join(folder, 'flat.v'), flatNetlist(instances));
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
