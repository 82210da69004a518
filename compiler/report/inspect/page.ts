import { counted, figure } from '../figures.js';
import type { Inspection, Problem } from '../inspection.js';
import type { ClockSummary } from './clockSummary.js';
import type { MachineSummary } from './machineSummary.js';
import type { MemorySummary } from './memorySummary.js';
import type { PathStep } from './pathSummary.js';
import { textPlot } from './textPlot.js';

/** Sets off a part of the page, by colour for one; the identity for plain text. */
export type Paint = (text: string, part: 'heading' | 'error' | 'warning' | 'note') => string;

const WIDTH = 80;
const PLOT_WIDTH = 64;
const LABEL = 13;
const MOST_PORTS = 12;
const MOST_CLOCKS = 12;
const MOST_KINDS = 12;
const MOST_MEMORIES = 12;
const MOST_MACHINES = 12;
const MOST_STATES = 12;
const MOST_STEPS = 16;
const MOST_PROBLEMS = 50;

/** An inspection as a page of text for a terminal of 80 columns. */
export function inspectionPage(inspection: Inspection, paint: Paint = (text) => text): string {
  const { top, registers, latches, loops, depth } = inspection;
  const rows: (readonly [string, readonly string[]])[] = [
    ['inputs', portWords(inspection.inputs)],
    ['outputs', portWords(inspection.outputs)],
    ...clockRows(inspection),
    ['gates', tally(inspection.gates, inspection.gatesByKind)],
    ...cellRows(inspection),
    ['registers', [figure(registers)]],
    ['latches', [figure(latches)]],
    ...memoryRows(inspection),
    ['state', stateWords(inspection)],
    ...machineRows(inspection),
    ['loops', [figure(loops)]],
    ['depth', [`${counted(depth, 'level')} of gates`]],
    ...pathRows(inspection.deepestPath),
    ['fan-out', fanoutWords(inspection)],
  ];
  const filled = rows.filter(([, words]) => words.length > 0);
  return [
    paint(top, 'heading'),
    ...filled.flatMap(([label, words]) => wrapped(label, words)),
    ...plotLines(inspection, paint),
    ...problemLines(inspection.problems, paint),
  ].join('\n');
}

/** Words behind a label, in as many lines as it takes; words are never broken. */
function wrapped(label: string, words: readonly string[]): string[] {
  const lines: string[] = [];
  let line = `  ${label}`.padEnd(LABEL);
  for (const word of words) {
    const isFirst = line.length <= LABEL;
    if (!isFirst && line.length + 1 + word.length > WIDTH) {
      lines.push(line);
      line = ' '.repeat(LABEL) + word;
    } else {
      line += isFirst ? word : ` ${word}`;
    }
  }
  return [...lines, line];
}

/** A list as words for `wrapped`: each but the last with its comma. */
const enumerated = (items: readonly string[]): string[] =>
  items.map((item, i) => (i + 1 < items.length ? `${item},` : item));

function shortened(items: readonly string[], most: number): string[] {
  const rest = items.length - most;
  return rest > 0 ? [...items.slice(0, most), `and ${figure(rest)} more`] : [...items];
}

function portWords(ports: Inspection['inputs']): string[] {
  if (ports.length === 0) return ['none'];
  const bits = ports.reduce((sum, port) => sum + port.width, 0);
  const names = ports.map(({ name, width }) => (width > 1 ? `${name}:${width}` : name));
  return [`${ports.length} (${bits} bits):`, ...enumerated(shortened(names, MOST_PORTS))];
}

function clockRows({ clocks, clockEnables }: Inspection): [string, string[]][] {
  if (clocks.length === 0) return [['clocks', ['none']]];
  const lines = shortened(clocks.map(clockText), MOST_CLOCKS);
  const rows = lines.map((line, i): [string, string[]] => [
    i === 0 ? 'clocks' : '',
    line.split(' '),
  ]);
  if (clockEnables.length === 0) return rows;
  return [...rows, ['', ['gated by', ...enumerated(shortened(clockEnables, MOST_PORTS))]]];
}

function clockText(clock: ClockSummary): string {
  const { port, registers, direct, falling, latches } = clock;
  const ways = (['direct', 'buffered', 'gated', 'divided'] as const)
    .filter((way) => clock[way] > 0)
    .map((way) => `${figure(clock[way])} ${way}`);
  const parts = [counted(registers, 'register')];
  if (direct < registers) parts[0] += `: ${ways.join(', ')}`;
  if (falling > 0) parts.push(`${figure(falling)} on its falling edge`);
  if (latches > 0) parts.push(counted(latches, 'latch', 'latches'));
  return `${port} (${parts.join('; ')})`;
}

function tally(total: number, counts: Readonly<Record<string, number>>): string[] {
  const words = tallied(Object.entries(counts));
  return words.length === 0 ? [figure(total)] : [`${figure(total)}:`, ...words];
}

function tallied(counts: readonly (readonly [string, number])[]): string[] {
  const words = counts.map(([name, count]) => `${figure(count)} ${name}`);
  return enumerated(shortened(words, MOST_KINDS));
}

function cellRows({ cells }: Inspection): [string, string[]][] {
  const total = Object.values(cells).reduce((sum, count) => sum + count, 0);
  return total === 0 ? [] : [['cells', tally(total, cells)]];
}

function memoryRows({ memories }: Inspection): [string, string[]][] {
  if (memories.length === 0) return [];
  const lines = shortened(memories.map(memoryText), MOST_MEMORIES);
  return lines.map((line, i): [string, string[]] => [i === 0 ? 'memories' : '', line.split(' ')]);
}

function memoryText({ name, words, width, readPorts, writePorts, clocks }: MemorySummary): string {
  const shape = `${counted(words, 'word')} of ${counted(width, 'bit')}`;
  const on = clocks.length > 0 ? ` on ${clocks.join(' and ')}` : '';
  const writes = `${counted(writePorts, 'write port')}${on}`;
  return `${name} (${shape}; ${counted(readPorts, 'read port')}, ${writes})`;
}

function machineRows({ machines }: Inspection): [string, string[]][] {
  const lines = shortened(machines.map(machineText), MOST_MACHINES);
  return lines.map((line, i): [string, string[]] => [i === 0 ? 'machines' : '', line.split(' ')]);
}

function machineText({ name, states }: MachineSummary): string {
  const names = shortened(
    states.map((state) => state.name),
    MOST_STATES,
  );
  return `${name} (${counted(states.length, 'named state')}: ${enumerated(names).join(' ')})`;
}

function stateWords({ state, registers, latches }: Inspection): string[] {
  const { bits, loopBits, withSet, withReset, initial, unset } = state;
  if (bits === 0) return ['none'];
  const parts = [
    loopBits > 0 ? `${figure(loopBits)} in loops` : '',
    withReset > 0 ? `${figure(withReset)} with reset` : '',
    withSet > 0 ? `${figure(withSet)} with set` : '',
    initial > 0 ? `${figure(initial)} with an initial value` : '',
    unset > 0 && unset < registers + latches ? `${figure(unset)} with none of these` : '',
    unset > 0 && unset === registers + latches ? 'none with set, reset or initial value' : '',
  ].filter((part) => part !== '');
  const total = counted(bits, 'bit');
  return parts.length === 0 ? [total] : [`${total}:`, ...enumerated(parts)];
}

function pathRows(steps: readonly PathStep[]): [string, string[]][] {
  if (steps.length === 0) return [];
  const words = pathWords(steps);
  const half = MOST_STEPS / 2;
  const rest = words.length - MOST_STEPS;
  const shown =
    rest > 1 ? [...words.slice(0, half), `(${figure(rest)} more)`, ...words.slice(-half)] : words;
  return [['deepest', shown.map((word, i) => (i > 0 ? `> ${word}` : word))]];
}

// A gate on the net of an output port of the same name is told once.
function pathWords(steps: readonly PathStep[]): string[] {
  const last = steps[steps.length - 1]!;
  const before = steps[steps.length - 2];
  if (last.kind !== 'output' || before?.net !== last.net) return steps.map(stepText);
  return [...steps.slice(0, -2).map(stepText), `${last.net} (${before.kind}, output)`];
}

const stepText = ({ net, kind, file }: PathStep): string =>
  file === undefined ? `${net} (${kind})` : net;

const fanoutWords = ({ fanouts }: Inspection): string[] =>
  tallied(fanouts.filter(({ readers }) => readers > 1).map(({ net, readers }) => [net, readers]));

function plotLines({ levels, gates }: Inspection, paint: Paint): string[] {
  if (levels.length < 2) return [];
  const without = levels[0]!;
  const heading = without > 0 ? `, ${figure(without)} of ${figure(gates)} in or behind loops` : '';
  const rows = textPlot(levels, 1, PLOT_WIDTH).map((row) => `    ${row}`);
  return [`  ${paint('gates by level', 'heading')}${heading}`, ...rows];
}

function problemLines(problems: readonly Problem[], paint: Paint): string[] {
  const heading = paint('problems', 'heading');
  if (problems.length === 0) return [`  ${heading}   none found`];
  const lines = problems.slice(0, MOST_PROBLEMS).map((problem) => {
    const { severity, code, message, file, line, column } = problem;
    const place = file === undefined ? '' : `${file}:${line}:${column}: `;
    const painted = paint(
      severity,
      severity === 'error' || severity === 'note' ? severity : 'warning',
    );
    return `    ${place}${painted}: ${message} [${code}]`;
  });
  const rest = problems.length - MOST_PROBLEMS;
  if (rest > 0) lines.push(`    and ${figure(rest)} more; --json has all`);
  return [`  ${heading}   ${problems.length}`, ...lines];
}
