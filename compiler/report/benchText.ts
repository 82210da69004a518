import type { BenchEngine, BenchResult, EngineFigures } from './benchResult.js';

const headings = ['engine', 'ns/cycle', 'fastest', 'slowest', 'cycles/s', 'build ms', 'x wasm'];

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
    `Median of ${rounds} rounds, taken in turn, on the same random stimulus.`,
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
    rate(1e9 / figures.nsPerCycle),
    shown(figures.buildMs),
    timesWasm.toFixed(timesWasm < 10 ? 2 : 1),
  ];
}

function agreementLine({ agreement }: BenchResult): string {
  const cycles = Object.entries(agreement).map(([name, count]) => `${count} (${name})`);
  return `Responses equal those of wasm in the cycles compared: ${cycles.join(', ')}.`;
}

const shown = (value: number): string => value.toFixed(value < 10 ? 2 : value < 1000 ? 1 : 0);

function rate(perSecond: number): string {
  if (perSecond >= 1e6) return `${(perSecond / 1e6).toPrecision(3)} M`;
  if (perSecond >= 1e3) return `${(perSecond / 1e3).toPrecision(3)} k`;
  return `${perSecond.toPrecision(3)}  `;
}

/** Names stand left in their column, figures right. */
function aligned(rows: readonly (readonly string[])[]): string[] {
  const widths = rows[0]!.map((_, column) => Math.max(...rows.map((row) => row[column]!.length)));
  return rows.map(([name, ...figures]) =>
    [name!.padEnd(widths[0]!), ...figures.map((cell, i) => cell.padStart(widths[i + 1]!))].join(
      '   ',
    ),
  );
}
