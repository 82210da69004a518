import { counted, figure } from '../../report/figures.js';
import type { Continuation } from '../repetition.js';
import type { CourseReport, ElementReport, SettleReport, Verdict } from '../settleReport.js';
import { rowOfNames, rowsByCycle, witnessRows } from './elementRows.js';
import { type Row, tableLines } from './tableLines.js';

const WIDTH = 80;
const MOST_FAULTS = 3;

interface Section {
  readonly title: string;
  readonly meaning: (elements: readonly ElementReport[]) => string;
  readonly rows: (elements: readonly ElementReport[], cycles: number) => Row[];
  /** Some forty lines in all. */
  readonly most: number;
}

const sections: Readonly<Record<Verdict, Section>> = {
  known: {
    title: 'known',
    meaning: (elements) => fromText(latest(elements, knownAfter)),
    rows: (elements) => rowsByCycle(elements, knownAfter),
    most: 12,
  },
  agreed: {
    title: 'pessimistic x',
    meaning: (elements) => `x, though all lanes agree ${fromText(latest(elements, agreedAfter))}`,
    rows: (elements) => rowsByCycle(elements, agreedAfter),
    most: 8,
  },
  undecided: {
    title: 'undecided',
    meaning: () => 'x with three values, and no lanes left to compare',
    rows: rowOfNames,
    most: 4,
  },
  powerUp: {
    title: 'power-up decides',
    meaning: () => 'different in some lanes',
    rows: witnessRows,
    most: 16,
  },
};
const inCounts: readonly Verdict[] = ['known', 'agreed', 'undecided', 'powerUp'];
const inTable: readonly Verdict[] = ['powerUp', 'undecided', 'agreed', 'known'];
const LABEL = Math.max(...inCounts.map((verdict) => sections[verdict].title.length));

/**
 * A report as text for a terminal of 80 columns: counts first, then the state elements by verdict,
 * shortened to some forty lines.
 *
 * `rerun` is a command that runs a lane again when the lane's seed is written behind it.
 */
export function reportText(report: SettleReport, rerun: string): string {
  const other = report.powerUps[1];
  return [
    ...headLines(report),
    ...faultLines(report),
    ...report.notes.map((note) => `note: ${note}`),
    ...inTable.flatMap((verdict) => sectionLines(report, verdict)),
    ...(other === undefined ? [] : ['', `lane ${other.lane} again: ${rerun} ${other.seed}`]),
  ].join('\n');
}

function headLines(report: SettleReport): string[] {
  const { circuit, elements, registers, latches, loopNets, lanes } = report;
  if (elements.length === 0) return [`${circuit}: no state, so nothing to settle`];
  const kinds = [
    counted(registers, 'register'),
    counted(latches, 'latch', 'latches'),
    counted(loopNets, 'loop net'),
  ].filter((text) => !text.startsWith('0 '));
  return [
    `${circuit}: ${kinds.join(', ')}; from unknown and from ${figure(lanes)} random power-ups`,
    lengthLine(report),
    '',
    ...countLines(report),
    '',
    ...changeLines(report),
  ];
}

function lengthLine({ cycles, stimulusCycles }: SettleReport): string {
  const held = cycles - stimulusCycles;
  if (stimulusCycles === 0) return `${cyclesText(cycles)} with the inputs held`;
  const stimulus = `${cyclesText(stimulusCycles)} of stimulus`;
  return held === 0 ? stimulus : `${stimulus}, then ${figure(held)} with the inputs held`;
}

function countLines({ counts, elements }: SettleReport): string[] {
  const width = figure(elements.length).length;
  return inCounts.flatMap((verdict) => {
    const count = counts[verdict];
    if (count === 0) return [];
    const { title, meaning } = sections[verdict];
    const members = elements.filter((element) => element.verdict === verdict);
    return [labelled(title, `${figure(count).padStart(width)}   ${meaning(members)}`)];
  });
}

function changeLines({ unknown, differing, cycles, stimulusCycles }: SettleReport): string[] {
  const held = cycles - stimulusCycles;
  return [
    labelled('unknown bits', changeText(unknown, cycles)),
    labelled('differing bits', changeText(differing, cycles)),
    ...heldTexts(unknown.held, differing.held, held).map((text, i) =>
      labelled(i === 0 ? 'inputs held' : '', text),
    ),
  ];
}

const changeText = ({ unchangedAfter }: CourseReport, cycles: number): string =>
  unchangedAfter === cycles && cycles > 0
    ? 'change in the last cycle still'
    : `no change after ${cyclesText(unchangedAfter)}`;

function heldTexts(
  known: Continuation | undefined,
  lanes: Continuation | undefined,
  held: number,
): string[] {
  if (held === 0) return [];
  if (known?.kind === 'still' && lanes?.kind === 'still') {
    return [heldText(known.after > lanes.after ? known : lanes, held)];
  }
  const [one, other] = [heldText(known, held), heldText(lanes, held)];
  return one === other ? [one] : [`three values: ${one}`, `lanes: ${other}`];
}

function heldText(found: Continuation | undefined, held: number): string {
  if (found === undefined) return `no state came again in ${cyclesText(held)}`;
  if (found.kind === 'still') return `nothing moves after ${cyclesText(found.after)}`;
  return `states come again every ${cyclesText(found.period)}`;
}

function faultLines({ faults, lanes }: SettleReport): string[] {
  if (faults.length === 0) return [];
  const shown = faults.slice(0, MOST_FAULTS).map(({ lane, seed, cycle, message, place }) => {
    const where = place === '' ? '' : `${place}: `;
    return `  ${where}lane ${lane} (seed ${seed}), cycle ${cycle}: ${message}`;
  });
  const rest = faults.length - shown.length;
  return [
    '',
    `${figure(faults.length)} of ${figure(lanes)} lanes ended, for a cycle had no result:`,
    ...shown,
    ...(rest > 0 ? [`  and ${figure(rest)} more`] : []),
  ];
}

function sectionLines({ elements, cycles }: SettleReport, verdict: Verdict): string[] {
  const members = elements.filter((element) => element.verdict === verdict);
  if (members.length === 0) return [];
  const { title, rows, most } = sections[verdict];
  return ['', title, ...tableLines(rows(members, cycles), WIDTH, most)];
}

const knownAfter = (element: ElementReport): number => element.knownAfter ?? 0;
const agreedAfter = (element: ElementReport): number => element.agreedAfter ?? 0;

const latest = (
  elements: readonly ElementReport[],
  afterOf: (element: ElementReport) => number,
): number => elements.reduce((most, element) => Math.max(most, afterOf(element)), 0);

const fromText = (after: number): string =>
  after === 0 ? 'from power-up on' : `after at most ${cyclesText(after)}`;

const labelled = (label: string, content: string): string => `${label.padEnd(LABEL)}   ${content}`;

const cyclesText = (cycles: number): string => counted(cycles, 'cycle');
