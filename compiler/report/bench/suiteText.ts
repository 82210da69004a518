import type { BenchResult } from '../benchResult.js';
import { aligned, shown } from './columns.js';
import { type BenchSuite, type SuiteMeans, speedOver } from './suite.js';

const NONE = '-';

/** The columns behind the name, each with what stands in it. */
const columns: readonly (readonly [heading: string, cell: (result: BenchResult) => string])[] = [
  ['gates', ({ gates }) => String(gates)],
  ['wasm ns', ({ engines }) => shown(engines.wasm.nsPerCycle)],
  ['spread', spread],
  ['best ns', ({ engines }) => shown(engines.wasm.best)],
  ['table best', ({ engines }) => shownIfAny(engines.table?.best)],
  ['bytecode', (result) => shownIfAny(speedOver(result, 'bytecode', 'wasm'))],
  ['reference', (result) => shownIfAny(speedOver(result, 'reference', 'wasm'))],
  ['native', (result) => shownIfAny(speedOver(result, 'native', 'wasm'))],
  ['march', (result) => shownIfAny(speedOver(result, 'nativeMarch', 'wasm'))],
  ['native/table', (result) => shownIfAny(speedOver(result, 'native', 'table'))],
  ['build ms', ({ engines }) => shown(engines.wasm.buildMs)],
  ['C ms', ({ engines }) => shownIfAny(engines.native?.buildMs)],
  ['first ms', ({ firstAnswer }) => shownIfAny(firstAnswer?.coldMs)],
  ['cached ms', ({ firstAnswer }) => shownIfAny(firstAnswer?.cachedMs)],
  ['ops/gate', ({ code }) => shown(code.operationsPerGate)],
  ['bytes/gate', ({ code }) => shown(code.bytesPerGate)],
];

/** Measurements of several circuits as a table of plain text, one line a circuit. */
export function suiteText({ machine, circuits, means }: BenchSuite): string {
  const { processor, cores, node, load } = machine;
  const headings = ['circuit', ...columns.map(([heading]) => heading)];
  const rows = circuits.map((result) => [
    result.circuit,
    ...columns.map(([, cell]) => cell(result)),
  ]);
  const notes = new Set(circuits.flatMap((result) => result.notes));
  return [
    ...aligned([headings, ...rows]),
    '',
    'wasm ns is the median of the rounds with their spread, best ns that of the best short burst.',
    'bytecode, reference, native and march (native for this machine) are times over that of wasm,',
    'all in their best bursts, which other programs disturb least.',
    ...meanLines(means),
    `${cores} cores of ${processor}, Node ${node}, load ${load}`,
    ...[...notes].map((note) => `note: ${note}`),
  ].join('\n');
}

function meanLines({ straightLine, asRun, straightLineMarch }: SuiteMeans): string[] {
  const line = (mean: number | undefined, what: string): string[] =>
    mean === undefined ? [] : [`geometric mean of ${what}: ${mean.toFixed(2)}`];
  return [
    ...line(straightLine, 'native over wasm'),
    ...line(asRun, 'native over what a run uses'),
    ...line(straightLineMarch, 'native for this machine over wasm'),
  ];
}

/** How far the fastest and the slowest round are from the median, in percent of it. */
function spread({ engines: { wasm } }: BenchResult): string {
  const percent = (ns: number): string => (100 * (ns / wasm.nsPerCycle - 1)).toFixed(0);
  return `${percent(wasm.fastest)}/+${percent(wasm.slowest)} %`;
}

const shownIfAny = (value: number | undefined): string =>
  value === undefined ? NONE : shown(value);
