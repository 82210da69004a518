import { aligned, rate, shown } from './bench/columns.js';
import type { BenchEngine, BenchResult, EngineFigures } from './benchResult.js';
import { HELD_CYCLES } from './benchRows.js';

const headings = [
  'engine',
  'ns/cycle',
  'fastest',
  'slowest',
  'best',
  'cycles/s',
  'build ms',
  'x wasm',
];

/** A measurement as a table of plain text, one line an engine. */
export function benchText(result: BenchResult): string {
  const { circuit, gates, registers, engines, rounds } = result;
  const rows = Object.entries(engines).map(([name, figures]) =>
    cellsOf(name as BenchEngine, figures, figures.nsPerCycle / engines.wasm.nsPerCycle),
  );
  return [
    `${circuit}: ${gates} gates, ${registers} registers`,
    '',
    ...aligned([headings, ...rows]),
    '',
    `Median of ${rounds} rounds, taken in turn, on the same random stimulus; best of short bursts.`,
    heldLine(result),
    codeLine(result),
    ...firstAnswerLines(result),
    agreementLine(result),
    ...result.notes.map((note) => `note: ${note}`),
  ].join('\n');
}

function cellsOf(name: BenchEngine, figures: EngineFigures, timesWasm: number): string[] {
  return [
    name,
    shown(figures.nsPerCycle),
    shown(figures.fastest),
    shown(figures.slowest),
    shown(figures.best),
    rate(1e9 / figures.nsPerCycle),
    shown(figures.buildMs),
    timesWasm.toFixed(timesWasm < 10 ? 2 : 1),
  ];
}

function agreementLine({ agreement }: BenchResult): string {
  const cycles = Object.entries(agreement).map(([name, count]) => `${count} (${name})`);
  return `Responses equal those of wasm in the cycles compared: ${cycles.join(', ')}.`;
}

function heldLine({ heldNs }: BenchResult): string {
  return `With each row held for ${HELD_CYCLES} cycles, a cycle of wasm takes ${shown(heldNs)} ns.`;
}

function codeLine({ code, gates }: BenchResult): string {
  const { operations, vectorOperations, bytes, operationsPerGate, bytesPerGate } = code;
  const vectors = vectorOperations === 0 ? '' : ` and ${vectorOperations} on sixteen bits`;
  const each = gates === 0 ? '' : `: ${operationsPerGate} and ${bytesPerGate} a gate`;
  return `A cycle of wasm is ${operations} operations${vectors}, the module ${bytes} bytes${each}.`;
}

function firstAnswerLines({ firstAnswer }: BenchResult): string[] {
  if (firstAnswer === undefined) return [];
  const [cold, cached] = [shown(firstAnswer.coldMs), shown(firstAnswer.cachedMs)];
  return [`A run of one cycle takes ${cold} ms, and ${cached} ms from the cache.`];
}
