import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { libraryFiles } from './cells/libraryFiles.js';
import { circuits } from './index.js';

const [name, ...settings] = process.argv.slice(2);
const circuit = circuits.find((c) => c.name === name);

if (name === 'cells' && settings.length === 1) {
  writeLibrary(settings[0]!);
} else if (!circuit) {
  fail(name === undefined ? usage() : `there is no circuit ${name}\n${usage()}`);
} else {
  try {
    const text = circuit.write(Object.fromEntries(settings.map(parse)));
    await pipeline(Readable.from(text), process.stdout);
  } catch (error) {
    if (error instanceof RangeError) fail(error.message);
    // A reader that has seen enough, as `head`, is no failure.
    else if (!isClosedPipe(error)) throw error;
  }
}

function writeLibrary(folder: string): void {
  mkdirSync(folder, { recursive: true });
  for (const { name, chunks } of libraryFiles) {
    writeFileSync(join(folder, name), [...chunks()].join(''));
  }
}

function parse(setting: string): [string, number] {
  const match = /^(\w+)=(\d+)$/.exec(setting);
  if (!match) throw new RangeError(`expected PARAMETER=NUMBER, got ${setting}`);
  return [match[1]!, Number(match[2])];
}

function isClosedPipe(error: unknown): boolean {
  return error instanceof Error && 'code' in error && error.code === 'EPIPE';
}

function usage(): string {
  const rows = circuits.flatMap(({ name, summary, parameters }) => [
    `  ${name.padEnd(10)} ${summary}`,
    ...Object.entries(parameters).map(
      ([parameter, { meaning, usual }]) => `${' '.repeat(13)}${parameter}=${usual}  ${meaning}`,
    ),
  ]);
  return [
    'Writes a circuit as gate-level Verilog to the standard output.',
    'Usage: npx tsx benchmarks/circuits/write.ts NAME [PARAMETER=NUMBER ...] > FILE.v',
    'Writes the library of cells, as Verilog and as Liberty, into a folder.',
    'Usage: npx tsx benchmarks/circuits/write.ts cells FOLDER',
    'Circuits, with their parameters and usual values:',
    ...rows,
  ].join('\n');
}

function fail(message: string): void {
  process.stderr.write(`${message}\n`);
  process.exitCode = 2;
}
