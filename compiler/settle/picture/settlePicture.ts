import { counted, figure } from '../../report/figures.js';
import type { Step } from '../memberCourse.js';
import type { SettleReport } from '../settleReport.js';
import { type CycleScale, countTicks, cycleScale } from './scales.js';
import { STYLE } from './style.js';

const WIDTH = 760;
const HEIGHT = 420;
const LEFT = 76;
const RIGHT = 28;
const TOP = 118;
const BASE = 352;

/** Fewer cycles than these are never shown, so that a step is not as wide as the picture. */
const FEWEST_SHOWN = 8;

interface Frame {
  readonly scale: CycleScale;
  /** The last number of cycles shown, and the largest count on the upright scale. */
  readonly last: number;
  readonly ceiling: number;
}

/**
 * How many state bits are unknown after each cycle, with three values and as far as lanes differ,
 * as one SVG picture. It carries its own light and dark colours, and no script.
 *
 * Cycles in which nothing changes any more are cut off; many cycles stand on a logarithmic scale.
 */
export function settlePicture(report: SettleReport): string {
  const { circuit, elements, unknown, differing, cycles } = report;
  const changed = Math.max(unknown.unchangedAfter, differing.unchangedAfter);
  const last = Math.max(1, Math.min(cycles, Math.max(FEWEST_SHOWN, Math.ceil(changed * 1.2) + 1)));
  const ticks = countTicks(most([...unknown.steps, ...differing.steps]));
  const frame: Frame = { scale: cycleScale(last), last, ceiling: ticks.at(-1)! };
  const title = `Unknown state of ${circuit}`;
  const lanes = figure(report.lanes);
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${WIDTH} ${HEIGHT}" width="${WIDTH}" height="${HEIGHT}" role="img" aria-labelledby="settle-title settle-description">
<title id="settle-title">${escaped(title)}</title>
<desc id="settle-description">${escaped(descriptionOf(report))}</desc>
<style>${STYLE}</style>
<rect class="ground" width="${WIDTH}" height="${HEIGHT}"/>
<text class="title" x="${LEFT}" y="34">${escaped(title)}</text>
<text class="quiet" x="${LEFT}" y="55">${counted(elements.length, 'state bit')}, from unknown and from ${lanes} random power-ups</text>
${legend('unknown', LEFT, 'x with three values', unknown.steps)}
${legend('differing', LEFT + 330, 'of these, different between lanes', differing.steps)}
${gridLines(ticks, frame)}
${heldMark(report, frame)}
${areas(report, frame)}
<line class="axis" x1="${LEFT}" y1="${BASE}" x2="${WIDTH - RIGHT}" y2="${BASE}"/>
${cycleTicks(frame)}
${label('quiet', (LEFT + WIDTH - RIGHT) / 2, BASE + 44, 'middle', acrossText(report, frame))}
<text class="quiet" text-anchor="middle" transform="translate(22 ${(TOP + BASE) / 2}) rotate(-90)">state bits</text>
</svg>
`;
}

function descriptionOf({ unknown, differing, cycles, elements }: SettleReport): string {
  const course = (steps: readonly Step[]): string =>
    `${figure(steps[0]![1])} at power-up and ${figure(steps.at(-1)![1])} after ${counted(cycles, 'cycle')}`;
  return (
    `Of ${counted(elements.length, 'state bit')}, ${course(unknown.steps)} are x with three values, ` +
    `and the same set from ${counted(unknown.unchangedAfter, 'cycle')} on; ` +
    `${course(differing.steps)} differ between lanes.`
  );
}

function acrossText({ cycles }: SettleReport, { scale, last }: Frame): string {
  const kind = scale.isLogarithmic ? 'cycles done (logarithmic scale)' : 'cycles done';
  return last < cycles ? `${kind}; no change from here to ${figure(cycles)}` : kind;
}

const most = (steps: readonly Step[]): number =>
  steps.reduce((so, [, members]) => Math.max(so, members), 1);

const xOf = ({ scale }: Frame, cycles: number): number =>
  LEFT + scale.at(cycles) * (WIDTH - RIGHT - LEFT);

const yOf = ({ ceiling }: Frame, members: number): number =>
  BASE - (members / ceiling) * (BASE - TOP);

/** A sample of the area, and what it shows, with the counts at both ends. */
function legend(kind: string, x: number, content: string, steps: readonly Step[]): string {
  const ends = `${figure(steps[0]![1])} → ${figure(steps.at(-1)![1])}`;
  return [
    `<rect class="${kind}" x="${x}" y="76" width="22" height="14"/>`,
    `<line class="${kind} edge" x1="${x}" y1="76" x2="${x + 22}" y2="76"/>`,
    `<text x="${x + 30}" y="88">${escaped(content)}<tspan class="quiet" dx="8">${ends}</tspan></text>`,
  ].join('');
}

function gridLines(ticks: readonly number[], frame: Frame): string {
  return ticks
    .map((members) => {
      const y = round(yOf(frame, members));
      const text = label('quiet', LEFT - 10, y + 4, 'end', figure(members));
      if (members === 0) return text;
      return `<line class="line" x1="${LEFT}" y1="${y}" x2="${WIDTH - RIGHT}" y2="${y}"/>${text}`;
    })
    .join('\n');
}

/** Where the stimulus ends, if that is in the picture. */
function heldMark({ stimulusCycles, cycles }: SettleReport, frame: Frame): string {
  if (stimulusCycles === 0 || stimulusCycles >= Math.min(cycles, frame.last)) return '';
  const x = round(xOf(frame, stimulusCycles));
  const isLate = frame.scale.at(stimulusCycles) > 0.75;
  const anchor = isLate ? 'end' : 'start';
  const text = label('quiet', x + (isLate ? -6 : 6), TOP - 4, anchor, 'inputs held from here');
  return `<line class="mark" x1="${x}" y1="${TOP - 14}" x2="${x}" y2="${BASE}"/>${text}`;
}

// Where both fill the same place neither colour would be its own: the first fills the gap alone.
function areas({ unknown, differing }: SettleReport, frame: Frame): string {
  const [upper, lower] = [stairs(unknown.steps, frame), stairs(differing.steps, frame)];
  const down = `V${BASE}H${LEFT}Z`;
  return [
    `<path class="unknown" fill-rule="evenodd" d="${upper}${down}${lower}${down}"/>`,
    `<path class="differing" d="${lower}${down}"/>`,
    `<path class="unknown edge" d="${upper}"/>`,
    `<path class="differing edge" d="${lower}"/>`,
  ].join('\n');
}

/** The count over the cycles as a staircase from left to right. */
function stairs(steps: readonly Step[], frame: Frame): string {
  const corners = steps
    .filter(([after]) => after <= frame.last)
    .map(([after, members], i) => {
      const x = round(xOf(frame, after));
      const y = round(yOf(frame, members));
      return i === 0 ? `M${x} ${y}` : `H${x}V${y}`;
    });
  return `${corners.join('')}H${round(xOf(frame, frame.last))}`;
}

function cycleTicks(frame: Frame): string {
  return frame.scale.ticks
    .map((cycles) => {
      const x = round(xOf(frame, cycles));
      const text = label('quiet', x, BASE + 20, 'middle', figure(cycles));
      return `<line class="axis" x1="${x}" y1="${BASE}" x2="${x}" y2="${BASE + 5}"/>${text}`;
    })
    .join('\n');
}

const label = (kind: string, x: number, y: number, anchor: string, content: string): string =>
  `<text class="${kind}" x="${round(x)}" y="${round(y)}" text-anchor="${anchor}">${escaped(content)}</text>`;

const round = (value: number): number => Math.round(value * 100) / 100;

const escaped = (content: string): string =>
  content.replace(/[<>&"]/g, (character) => `&#${character.charCodeAt(0)};`);
