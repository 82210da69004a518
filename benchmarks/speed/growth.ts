import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { thisMachine } from '../../compiler/report/bench/machine.js';
import { aes128, aesColumn } from '../circuits/aes128.js';
import { libraryFiles } from '../circuits/cells/libraryFiles.js';
import { mapped } from '../circuits/cells/mapping/mapped.js';
import { primitivesFile, verilogFile } from '../circuits/cells/verilog/library.js';
import type { Module } from '../circuits/netlistWriter.js';
import { verilog } from '../circuits/verilog.js';
import { builtCommand, runApart, runCommand, type Used } from '../reading/children.js';
import { isBusy } from './busy.js';
import { type GrowthPoint, pageOf, type Stages } from './growthPage.js';

/**
 * Measures how time and memory grow with the circuit: cores of AES-128, mapped to a cell
 * library, from about a thousand gates to a million, each in processes of its own. Writes
 * `benchmarks/results/growth.json` and `growth.md`.
 *
 *   npm run build && npx tsx benchmarks/speed/growth.ts [SIZES]
 *
 * With SIZES, only the smallest so many are measured and nothing is written. All take some minutes.
 */

/** What is measured: a column of a round, which is smaller than any core, and cores. */
const SIZES: readonly { readonly name: string; readonly build: () => Module }[] = [
  { name: 'a column', build: () => aesColumn() },
  ...[2, 22, 222].map((cores) => ({ name: `${cores} cores`, build: () => aes128(cores) })),
];

const results = fileURLToPath(new URL('../results/', import.meta.url));
const once = fileURLToPath(new URL('growthOnce.mjs', import.meta.url));
const most = Number(process.argv[2] ?? Number.POSITIVE_INFINITY);

if (!existsSync(builtCommand)) {
  process.stderr.write('there is no built command; run npm run build first\n');
  process.exitCode = 2;
} else {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-growth-'));
  try {
    await measure(folder);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

async function measure(folder: string): Promise<void> {
  const machine = thisMachine();
  for (const { name, chunks } of libraryFiles) {
    if (name === verilogFile || name === primitivesFile)
      writeFileSync(join(folder, name), [...chunks()].join(''));
  }
  const points: GrowthPoint[] = [];
  for (const { name, build } of SIZES.slice(0, most)) {
    points.push(await pointOf(folder, name, build()));
  }
  const page = pageOf(machine, points);
  process.stdout.write(page);
  if (points.length < SIZES.length || isBusy(machine)) return;
  writeFileSync(join(results, 'growth.json'), `${JSON.stringify({ machine, points }, null, 2)}\n`);
  writeFileSync(join(results, 'growth.md'), page);
}

async function pointOf(folder: string, name: string, design: Module): Promise<GrowthPoint> {
  process.stderr.write(`${name}\n`);
  const netlist = join(folder, 'aes.v');
  let bytes = 0;
  const file = await open(netlist, 'w');
  for (const chunk of verilog(mapped(design, { hasClockTree: false }))) {
    bytes += chunk.length;
    await file.writeFile(chunk);
  }
  await file.close();
  const files = [netlist, join(folder, verilogFile)];
  const packed = await stagesOf('1', files);
  const plain = await stagesOf('0', files);
  const response = join(folder, 'response.csv');
  const request = ['--random', '1', '--cycles', '1', '--response', response, '--no-cache'];
  const first = await runCommand('run', ...files, ...request);
  return { name, netlistBytes: bytes, packed, plain, first };
}

async function stagesOf(packs: string, files: readonly string[]): Promise<Stages & { used: Used }> {
  const { used, stdout } = await runApart(once, [packs, ...files]);
  return { ...(JSON.parse(stdout) as Stages), used };
}
