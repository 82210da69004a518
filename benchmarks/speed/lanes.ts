import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { fileURLToPath } from 'node:url';
import { isGate } from '../../compiler/circuit/gates.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { circuits } from '../circuits/index.js';
import { bestOf } from './bestOf.js';
import { type Contender, compiledLanes, compiledSingle, nativeVectors } from './laneContenders.js';

/**
 * Measures many sequences side by side, one in each bit of a word, beside a single one and beside
 * C on 16-byte vectors, and writes `benchmarks/results/lanes.json` and `lanes.md`.
 *
 *   npx tsx benchmarks/speed/lanes.ts [SECONDS] [CIRCUIT...]
 *
 * SECONDS are spent on each figure (default 3). Files are only written if all circuits are run.
 */

const results = fileURLToPath(new URL('../results/', import.meta.url));
const published = fileURLToPath(new URL('../../../shared/circuits/', import.meta.url));

const allNames = ['s298', 's1488', 's5378', 's13207.1', 's35932', 'lock', 'uart', 'counter'];
allNames.push('sha256', 'aes128');

interface Row {
  readonly circuit: string;
  readonly gates: number;
  readonly registers: number;
  /** Nanoseconds a cycle, of all sequences together. */
  readonly nsPerCycle: Readonly<Record<string, number>>;
  /** How many times as many cycles of a sequence 128 lanes do in the same time. */
  readonly gain: number;
  /** Time of vectors in C over that of 128 lanes. */
  readonly native?: number;
}

const emitter = localEmitter();

function sourceOf(name: string): Source | undefined {
  const own = circuits.find((circuit) => circuit.name === name);
  if (own !== undefined) return new Source(`${name}.v`, [...own.write()].join(''));
  const file = `${published}${name}.bench`;
  return existsSync(file) ? new Source(`${name}.bench`, readFileSync(file)) : undefined;
}

function designsOf(source: Source): [two: Design, three: Design] {
  const circuit = readNetlist([source], {}, new Diagnostics())!;
  return [designOf(circuit), designOf(circuit, { threeValued: true })];
}

async function measure(name: string, source: Source, seconds: number): Promise<Row> {
  process.stderr.write(`${name}\n`);
  const [two, three] = designsOf(source);
  const contenders: Record<string, Contender> = {
    single: await compiledSingle(two, emitter),
    lanes32: await compiledLanes(two, 32, emitter),
    lanes64: await compiledLanes(two, 64, emitter),
    lanes128: await compiledLanes(two, 128, emitter),
    lanes128x: await compiledLanes(three, 128, emitter),
  };
  const native = await nativeVectors(two);
  if (native !== undefined) {
    expectSame(name, contenders.lanes128!.response, native.response);
    contenders.native = native;
  }
  const nsPerCycle = await bestOf(contenders, seconds);
  native?.close();
  const { lanes128, single } = nsPerCycle;
  const { circuit } = two;
  return {
    circuit: name,
    gates: circuit.kind.filter(isGate).length,
    registers: circuit.registers.count,
    nsPerCycle,
    gain: round((128 * single!) / lanes128!, 1),
    ...(native && { native: round(nsPerCycle.native! / lanes128!, 2) }),
  };
}

// C and generated code run the same rows from the same power-up.
function expectSame(name: string, lanes: Uint32Array, native: Uint32Array): void {
  const first = lanes.findIndex((number, i) => number !== native[i]);
  if (first >= 0) throw new Error(`${name}: number ${first} of the response differs in C`);
}

const round = (value: number, digits: number): number => Number(value.toFixed(digits));

function tableRow({ circuit, gates, registers, nsPerCycle, gain, native }: Row): string {
  const { single, lanes32, lanes64, lanes128, lanes128x } = nsPerCycle;
  const cells = [circuit, gates, registers, single, lanes32, lanes64, lanes128, lanes128x, gain];
  return `| ${[...cells, nsPerCycle.native ?? '–', native ?? '–'].join(' | ')} |`;
}

function report(rows: readonly Row[], machine: Readonly<Record<string, unknown>>): string[] {
  return [
    '# Many sequences side by side',
    '',
    `Measured on ${machine.cores} cores of ${machine.processor}, Node ${machine.node}, by`,
    '`npx tsx benchmarks/speed/lanes.ts`: the best of many bursts of a millisecond, taken in turn.',
    'Nanoseconds are those of one cycle of all sequences together. Every cycle reads a stimulus row',
    'and writes a response row. The gain tells how many times as many cycles of a sequence 128 lanes',
    'do in the same time as generated code for one. C is straight-line code of the same netlist on',
    '16-byte vectors, 128 sequences, under `-O2 -march=native`, with a compiler barrier after each',
    'cycle; its responses are compared before anything is measured, and its ratio is its time over',
    'that of 128 lanes, so that more is better for generated code.',
    '',
    'Code for one sequence looks small machines up in a table (s298, s1488, lock), and works on',
    'sixteen bits at a time where a circuit is regular (s35932, and parts of sha256 and aes128);',
    'neither is left to gain for lanes there.',
    '',
    '| circuit | gates | registers | 1 | 32 | 64 | 128 | 128, three values | gain of 128 | C vectors | C / 128 |',
    '|---|---|---|---|---|---|---|---|---|---|---|',
    ...rows.map(tableRow),
  ];
}

const [seconds = '3', ...names] = process.argv.slice(2);
const rows: Row[] = [];
for (const name of names.length > 0 ? names : allNames) {
  const source = sourceOf(name);
  if (source === undefined) process.stderr.write(`${name} is not there\n`);
  else rows.push(await measure(name, source, Number(seconds)));
}
const machine = { processor: cpus()[0]?.model, cores: cpus().length, node: process.version };
const lines = report(rows, machine);
process.stdout.write(
  `${lines.slice(lines.findIndex((line) => line.startsWith('|'))).join('\n')}\n`,
);
if (names.length === 0) {
  const json = JSON.stringify({ machine, circuits: rows }, null, 2);
  writeFileSync(`${results}lanes.json`, `${json}\n`);
  writeFileSync(`${results}lanes.md`, `${lines.join('\n')}\n`);
}
