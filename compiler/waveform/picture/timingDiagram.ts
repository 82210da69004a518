import { figure } from '../../report/figures.js';
import type { Stretch } from './courses.js';
import { STYLE } from './style.js';
import { escaped, round, tickStep } from './svgText.js';

/** What a timing diagram shows: the values of signals over some cycles, last one exclusive. */
export interface TimingDiagram {
  readonly circuit: string;
  readonly from: number;
  readonly to: number;
  readonly lines: readonly DiagramLine[];
}

/** One signal: its values one after another, without gaps. */
export interface DiagramLine {
  readonly name: string;
  /** Whether it has several bits. */
  readonly isWord: boolean;
  readonly stretches: readonly Stretch[];
}

const TOP = 92;
const ROW = 30;
const WAVE = 18;
const RIGHT = 24;
const LEAST_NAME = 90;
const MOST_NAME = 340;
const NAME_LETTER = 7.2;
const VALUE_LETTER = 7;
const WIDEST = 1500;
const NARROWEST_CHART = 480;

interface Frame {
  readonly left: number;
  readonly right: number;
  readonly base: number;
  readonly x: (cycle: number) => number;
}

/**
 * A timing diagram as one SVG picture. It carries its own light and dark colours, and no script.
 *
 * A bit is a line, filled below where it is 1; a word is a row of boxes with its value in
 * hexadecimal, in binary where some of its bits are x. What is x altogether is hatched. A value
 * that has no room in its box is shown when it is pointed at.
 */
export function timingDiagram(diagram: TimingDiagram): string {
  const { circuit, from, to, lines } = diagram;
  const cycles = to - from;
  const longest = Math.max(0, ...lines.map(({ name }) => name.length));
  const left = Math.min(MOST_NAME, Math.max(LEAST_NAME, 24 + NAME_LETTER * longest));
  const width = Math.max(NARROWEST_CHART, Math.min(WIDEST, cycles * cycleWidth(lines)));
  const base = TOP + lines.length * ROW;
  const right = left + width;
  const frame: Frame = {
    left,
    right,
    base,
    x: (cycle) => left + ((cycle - from) / cycles) * width,
  };
  const title = `Waves of ${circuit}`;
  const [total, height] = [round(right + RIGHT), base + 62];
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${total} ${height}" width="${total}" height="${height}" role="img" aria-labelledby="wave-title wave-description">
<title id="wave-title">${escaped(title)}</title>
<desc id="wave-description">${escaped(describe(diagram))}</desc>
<style>${STYLE}</style>
<defs><pattern id="unknown-hatch" width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><rect class="hatch-ground" width="7" height="7"/><line class="hatch" x1="0" y1="0" x2="0" y2="7"/></pattern></defs>
<rect class="ground" width="${total}" height="${height}"/>
<text class="title" x="24" y="34">${escaped(title)}</text>
<text class="quiet" x="24" y="56">${escaped(caption(diagram))}</text>
${grid(diagram, frame)}
${lines.map((line, row) => lineText(line, row, frame)).join('\n')}
</svg>
`;
}

const caption = ({ from, to }: TimingDiagram): string =>
  `cycles ${figure(from)} to ${figure(to - 1)}, values as they are when outputs are sampled`;

const describe = (diagram: TimingDiagram): string =>
  `The values of ${diagram.lines.length} signals in ${caption(diagram)}.`;

// As wide as the values that change most often need, within reason.
function cycleWidth(lines: readonly DiagramLine[]): number {
  const needed = lines
    .filter(({ isWord }) => isWord)
    .flatMap(({ stretches }) =>
      stretches.map(({ from, to, text }) => (shown(text).length * VALUE_LETTER + 12) / (to - from)),
    )
    .sort((a, b) => a - b);
  const most = needed[Math.floor(0.9 * needed.length)] ?? 0;
  return Math.max(18, Math.min(72, most));
}

function grid({ from, to }: TimingDiagram, { base, x, left, right }: Frame): string {
  const step = tickStep(to - from, (right - left) / 64);
  const marks: string[] = [];
  for (let cycle = Math.ceil(from / step) * step; cycle <= to; cycle += step) {
    const at = round(x(cycle));
    marks.push(
      `<line class="line" x1="${at}" y1="${TOP - 12}" x2="${at}" y2="${base}"/>` +
        `<line class="axis" x1="${at}" y1="${base}" x2="${at}" y2="${base + 5}"/>` +
        `<text class="quiet" x="${at}" y="${base + 20}" text-anchor="middle">${figure(cycle)}</text>`,
    );
  }
  const middle = round((left + right) / 2);
  return [
    ...marks,
    `<line class="axis" x1="${round(left)}" y1="${base}" x2="${round(right)}" y2="${base}"/>`,
    `<text class="quiet" x="${middle}" y="${base + 44}" text-anchor="middle">cycle</text>`,
  ].join('\n');
}

function lineText({ name, isWord, stretches }: DiagramLine, row: number, frame: Frame): string {
  const top = TOP + row * ROW + (ROW - WAVE) / 2 - 4;
  const place = round(top + WAVE / 2 + 4.5);
  const letters = Math.floor((frame.left - 24) / NAME_LETTER);
  // The end of a hierarchical name tells more than its beginning.
  const label = name.length > letters ? `…${name.slice(name.length - letters + 1)}` : name;
  const band =
    row % 2 === 0
      ? ''
      : `<rect class="band" x="0" y="${round(top - (ROW - WAVE) / 2)}" width="${round(frame.left)}" height="${ROW}"/>`;
  const title = label === name ? '' : `<title>${escaped(name)}</title>`;
  return [
    band,
    `<text x="${round(frame.left - 12)}" y="${place}" text-anchor="end">${escaped(label)}${title}</text>`,
    isWord ? wordLine(stretches, top, frame) : bitLine(stretches, top, frame),
  ].join('');
}

function bitLine(stretches: readonly Stretch[], top: number, { x }: Frame): string {
  const parts: string[] = [];
  let path = '';
  for (const { from, to, text } of stretches) {
    const [start, end] = [round(x(from)), round(x(to))];
    if (text === 'x') {
      parts.push(levelPath(path), box('unknown', start, top, end - start, `${name(from, to)}: x`));
      path = '';
      continue;
    }
    const isHigh = text === '1';
    const y = isHigh ? top : top + WAVE;
    if (isHigh) {
      const width = round(end - start);
      parts.push(`<rect class="high" x="${start}" y="${top}" width="${width}" height="${WAVE}"/>`);
    }
    path += path === '' ? `M${start} ${y}H${end}` : `V${y}H${end}`;
  }
  return parts.join('') + levelPath(path);
}

const levelPath = (path: string): string =>
  path === '' ? '' : `<path class="level" d="${path}"/>`;

function wordLine(stretches: readonly Stretch[], top: number, { x }: Frame): string {
  return stretches
    .map(({ from, to, text }) => {
      const [start, end] = [round(x(from)), round(x(to))];
      const isAllX = /^0bx+$/.test(text);
      // A gap between two values, where there is room for one.
      const gap = Math.min(1.5, (end - start) / 6);
      const wide = end - start - 2 * gap;
      const inside = isAllX ? 'x' : shown(text);
      const drawn = box(
        isAllX ? 'unknown' : 'word',
        start + gap,
        top,
        wide,
        `${name(from, to)}: ${text}`,
      );
      if (isAllX || inside.length * VALUE_LETTER + 6 > wide) return drawn;
      const middle = round((start + end) / 2);
      return `${drawn}<text class="value" x="${middle}" y="${round(top + WAVE / 2 + 4)}" text-anchor="middle">${inside}</text>`;
    })
    .join('');
}

const name = (from: number, to: number): string =>
  to - from === 1 ? `cycle ${figure(from)}` : `cycles ${figure(from)} to ${figure(to - 1)}`;

// Digits alone: the base is the same everywhere, and binary digits with an x in them show theirs.
const shown = (text: string): string => (text.startsWith('0b') ? text.slice(1) : text.slice(2));

const box = (kind: string, x: number, y: number, width: number, tip: string): string =>
  `<rect class="${kind}" x="${round(x)}" y="${round(y)}" width="${round(width)}" height="${WAVE}" rx="4"><title>${escaped(tip)}</title></rect>`;
