import type { Machine } from '../../compiler/report/bench/suite.js';
import type { Used } from '../reading/children.js';

/** What `growthOnce.mjs` prints. */
export interface Stages {
  /** Logic gates after reading, whatever cells they come from. */
  readonly gates: number;
  readonly registers: number;
  readonly operations: number;
  readonly vectorOperations: number;
  /** Of the module. */
  readonly bytes: number;
  /** State, and what passes between functions; there are two such areas. */
  readonly areaBytes: number;
  readonly seconds: Readonly<Record<'read' | 'passes' | 'emit' | 'compile' | 'firstCycle', number>>;
  readonly nsPerCycle: number;
}

/** A circuit of one size. */
export interface GrowthPoint {
  readonly name: string;
  readonly netlistBytes: number;
  readonly packed: Stages & { readonly used: Used };
  /** The same without `packWords`. */
  readonly plain: Stages & { readonly used: Used };
  /** What the command used up to a response row, without a cache. */
  readonly first: Used;
}

/** The results as a page to read. */
export function pageOf(machine: Machine, points: readonly GrowthPoint[]): string {
  const { processor, cores, node, load } = machine;
  const row = (name: string, cell: (point: GrowthPoint) => string): string =>
    `| ${[name, ...points.map(cell)].join(' | ')} |`;
  const stage = (name: string, of: keyof Stages['seconds']): string =>
    row(`${name}, s`, ({ packed }) => short(packed.seconds[of]));
  return [
    '# Growth',
    '',
    'Cores of AES-128 one behind another (`benchmarks/circuits/aes128.ts`), mapped to a cell library,',
    'flat; the smallest is one column of a round. A linear stage takes ten times as long from one size',
    'to the next.',
    '',
    `Measured on ${cores} cores of ${processor}, Node ${node}, load ${load}, by`,
    '`npm run build && npx tsx benchmarks/speed/growth.ts`. Times of stages are of one run each, and',
    'longer the more else the machine has to do; a cycle is the best of many bursts.',
    '',
    row('', ({ name }) => name),
    row('---', () => '---:'),
    row('gates', ({ packed }) => whole(packed.gates)),
    row('registers', ({ packed }) => whole(packed.registers)),
    row('netlist, MB', ({ netlistBytes }) => short(netlistBytes / 1e6)),
    stage('reading', 'read'),
    stage('passes', 'passes'),
    stage('emission', 'emit'),
    stage('compilation of the module', 'compile'),
    stage('first cycle', 'firstCycle'),
    row('first response row by the command, s', ({ first }) => short(first.seconds)),
    row('its processor time, s', ({ first }) => short(first.processorSeconds)),
    row('its memory at most, MB', ({ first }) => short(first.peakBytes / 1e6)),
    '',
    'The same circuits, as users get them and without `packWords`, so that every gate is an operation',
    'of its own:',
    '',
    row('', ({ name }) => name),
    row('---', () => '---:'),
    ...[false, true].flatMap((isPlain) => {
      const name = (what: string): string => (isPlain ? `${what}, not packed` : what);
      const of = (point: GrowthPoint): Stages => (isPlain ? point.plain : point.packed);
      return [
        row(name('operations'), (point) => whole(of(point).operations)),
        row(name('vector operations'), (point) => whole(of(point).vectorOperations)),
        row(name('module, kB'), (point) => short(of(point).bytes / 1e3)),
        row(name('two areas, kB'), (point) => short((2 * of(point).areaBytes) / 1e3)),
        row(name('a cycle, ns'), (point) => short(of(point).nsPerCycle)),
        row(name('ns a gate and cycle'), (point) => short(of(point).nsPerCycle / of(point).gates)),
        row(name('ps a byte of the module'), (point) =>
          short((of(point).nsPerCycle * 1e3) / of(point).bytes),
        ),
      ];
    }),
    '',
    ...explanation(points),
  ].join('\n');
}

function explanation(points: readonly GrowthPoint[]): string[] {
  const costs = (of: 'packed' | 'plain'): number[] =>
    points.map((point) => point[of].nsPerCycle / point[of].gates);
  const growth = (of: 'packed' | 'plain'): string =>
    (costs(of).at(-1)! / Math.min(...costs(of))).toFixed(1);
  return [
    `From the cheapest size to the largest, a gate costs ${growth('packed')} times as much, and ${growth('plain')} times where`,
    'nothing is packed. Code runs through once a cycle: while all of it stays in the first-level',
    'instruction cache, instructions bound it; then what is fetched for each byte of code does, from',
    'the second-level cache, the third and at last memory. Packing makes that code shorter, so that',
    'each step comes at a larger circuit.',
    '',
  ];
}

const whole = (value: number): string => value.toLocaleString('en-US');

function short(value: number): string {
  if (value >= 100) return whole(Math.round(value));
  return String(Number(value.toPrecision(3)));
}
