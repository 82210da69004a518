import type { Machine } from '../../compiler/report/bench/suite.js';

/** What some passes make of a circuit. */
export interface Setting {
  readonly operations: number;
  /** Each on sixteen bits. */
  readonly vectorOperations: number;
  /** Of the module. */
  readonly bytes: number;
  /** Milliseconds that all passes take together, from the circuit to the program. */
  readonly passesMs: number;
}

/** A setting by name, and how fast its code runs. */
export interface MeasuredSetting extends Setting {
  readonly of: string;
  readonly nsPerCycle: number;
}

/** A circuit in all settings, the one with all passes first. */
export interface AblationRow {
  readonly circuit: string;
  readonly settings: readonly MeasuredSetting[];
  /** Nanoseconds a cycle where it runs by a table of its cycles. */
  readonly byTable?: number;
}

/** What `ablation.json` holds. */
export interface Ablation {
  readonly machine: Machine;
  readonly seconds: number;
  readonly circuits: readonly AblationRow[];
}

/** The results as a page to read. */
export function pageOf({ machine, seconds, circuits }: Ablation): string {
  const { processor, cores, node, load } = machine;
  return [
    '# What each pass gains',
    '',
    `Measured on ${cores} cores of ${processor}, Node ${node}, load ${load}, by`,
    '`npx tsx benchmarks/speed/ablation.ts`: straight-line code with all passes, and with one left',
    `out. Best of many short bursts, taken in turn, ${seconds} s for each figure. Names are those of`,
    '`PassSwitches`; a pass that finds nothing to do in a circuit changes nothing but noise there.',
    'A state of bytes instead of words has no switch: vectors work on bytes alone.',
    '',
    '## Time of a cycle',
    '',
    'Nanoseconds with all passes, and times as long without one.',
    '',
    ...table(circuits, ({ nsPerCycle }) => nsPerCycle, timesText, true),
    ...byTable(circuits),
    '## Operations',
    '',
    'In one cycle, single ones and vectors together, and how many more or fewer without a pass.',
    '',
    ...table(circuits, operationsOf, changeText),
    '## Bytes of the module',
    '',
    ...table(circuits, ({ bytes }) => bytes, changeText),
    '## Milliseconds of all passes',
    '',
    ...table(circuits, ({ passesMs }) => passesMs, changeText),
  ].join('\n');
}

const operationsOf = ({ operations, vectorOperations }: Setting): number =>
  operations + vectorOperations;

const timesText = (value: number, whole: number): string => (value / whole).toFixed(2);

function changeText(value: number, whole: number): string {
  const percent = Math.round((value / whole - 1) * 100);
  return percent === 0 ? '' : `${percent > 0 ? '+' : ''}${percent} %`;
}

// A row for each setting: the figures of the first one, and how those of the others compare.
function table(
  circuits: readonly AblationRow[],
  figureOf: (setting: MeasuredSetting) => number,
  compared: (value: number, whole: number) => string,
  hasMean = false,
): string[] {
  const mean = hasMean ? ['mean'] : [];
  const head = ['', ...circuits.map(({ circuit }) => circuit), ...mean];
  const rows = circuits[0]!.settings.map(({ of }, i) => {
    const pairs = circuits.map(({ settings }) => [
      figureOf(settings[i]!),
      figureOf(settings[0]!),
    ]) as [number, number][];
    const cells = pairs.map(([value, whole]) => (i === 0 ? plain(value) : compared(value, whole)));
    const logs = pairs.map(([value, whole]) => Math.log(value / whole));
    const product = Math.exp(logs.reduce((sum, log) => sum + log, 0) / logs.length);
    return [of, ...cells, ...mean.map(() => (i === 0 ? '' : product.toFixed(2)))];
  });
  const rule = head.map((_, i) => (i === 0 ? '---' : '---:'));
  return [...[head, rule, ...rows].map((cells) => `| ${cells.join(' | ')} |`), ''];
}

const plain = (value: number): string => (value < 100 ? String(value) : value.toFixed(0));

function byTable(circuits: readonly AblationRow[]): string[] {
  const known = circuits.filter(({ byTable }) => byTable !== undefined);
  if (known.length === 0) return [];
  const figures = known.map(({ circuit, byTable, settings }) => {
    const times = settings[0]!.nsPerCycle / byTable!;
    return `${circuit} ${byTable} ns (${times.toFixed(1)} times as fast)`;
  });
  return [`Where cycles are looked up in a table (\`tables\`): ${figures.join(', ')}.`, ''];
}
