import { execFileSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { cpus, tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { BenchResult } from '../../compiler/report/benchResult.js';
import { circuits } from '../circuits/index.js';

/**
 * Measures generated code beside the interpreters and native C on our own circuits and on the
 * published ones, where their folder stands beside the project, and writes `benchmarks/results`.
 *
 *   npm run build && npx tsx benchmarks/speed/measure.ts
 */

const command = fileURLToPath(new URL('../../dist/compiler/cli/main.js', import.meta.url));
const results = fileURLToPath(new URL('../results/', import.meta.url));
const published = fileURLToPath(new URL('../../../shared/circuits/', import.meta.url));

const ownNames = ['lock', 'uart', 'counter', 'sha256', 'aes128'];
const publishedNames = ['s298', 's1488', 's5378', 's13207.1', 's35932'];

function netlists(folder: string): string[] {
  const own = ownNames.map((name) => {
    const file = join(folder, `${name}.v`);
    const circuit = circuits.find((each) => each.name === name)!;
    writeFileSync(file, [...circuit.write()].join(''));
    return file;
  });
  const files = publishedNames.map((name) => join(published, `${name}.bench`));
  return [...files.filter((file) => existsSync(file)), ...own];
}

function measure(file: string): BenchResult {
  process.stderr.write(`${basename(file)}\n`);
  const text = execFileSync(process.execPath, [command, 'bench', file, '--json'], {
    encoding: 'utf8',
    stdio: ['ignore', 'pipe', 'ignore'],
  });
  return JSON.parse(text) as BenchResult;
}

function row({ circuit, gates, registers, engines }: BenchResult): string {
  const { wasm, bytecode, reference, native } = engines;
  const ratio = (other: { nsPerCycle: number } | undefined): string =>
    other ? (other.nsPerCycle / wasm.nsPerCycle).toFixed(2) : '–';
  const cells = [
    circuit,
    gates,
    registers,
    wasm.nsPerCycle,
    wasm.buildMs,
    ratio(bytecode),
    ratio(reference),
    ratio(native),
    native ? Math.round(native.buildMs) : '–',
  ];
  return `| ${cells.join(' | ')} |`;
}

const folder = mkdtempSync(join(tmpdir(), 'clockstride-speed-'));
try {
  const measured = netlists(folder).map(measure);
  const machine = { processor: cpus()[0]?.model, cores: cpus().length, node: process.version };
  writeFileSync(
    join(results, 'speed.json'),
    `${JSON.stringify({ machine, circuits: measured }, null, 2)}\n`,
  );
  const lines = [
    '# Speed of generated code',
    '',
    `Measured on ${machine.cores} cores of ${machine.processor}, Node ${machine.node}, by`,
    '`npm run build && npx tsx benchmarks/speed/measure.ts`. All engines read a stimulus row and write',
    'a response row in every cycle, and their responses are compared before anything is measured.',
    'Medians of seven rounds taken in turn; ratios are times over the time of the generated code, so',
    'that more is better for it. Native is straight-line C of the same netlist under `cc -O2`, with a',
    'compiler barrier after each cycle.',
    '',
    '| circuit | gates | registers | ns a cycle | build ms | bytecode / wasm | reference / wasm | native / wasm | native build ms |',
    '|---|---|---|---|---|---|---|---|---|',
    ...measured.map(row),
  ];
  writeFileSync(join(results, 'speed.md'), `${lines.join('\n')}\n`);
  process.stdout.write(`${lines.slice(9).join('\n')}\n`);
} finally {
  rmSync(folder, { recursive: true });
}
