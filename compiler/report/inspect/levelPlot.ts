import { counted, figure } from '../figures.js';
import type { Inspection } from '../inspection.js';
import { type Bin, binLabel, binned } from './bins.js';

const WIDTH = 760;
const LEFT = 96;
const RIGHT = 24;
const PANEL_TOP = 56;
const PANEL_HEIGHT = 268;
const BARS = 176;
const MOST_BARS = 48;

/** One bar chart of the plot: what is counted by what. */
interface Panel {
  readonly title: string;
  readonly counts: readonly number[];
  /** The first index that is shown. */
  readonly first: number;
  /** What the axis across shows. */
  readonly across: string;
  /** One of the things that are counted. */
  readonly unit: string;
  /** Stands in place of bars where there is nothing to count. */
  readonly empty: string;
}

/**
 * Gates by level, and registers by the depth of the logic between them and other registers, as one
 * SVG picture. It carries its own light and dark colours, and no script.
 */
export function levelPlot(inspection: Inspection): string {
  const { top, levels, registerDepths, depth, gates } = inspection;
  const deepest = Math.max(registerDepths.length - 1, 0);
  const panels: Panel[] = [
    {
      title: 'Gates by level',
      counts: levels,
      first: 1,
      across: 'level: gates on the longest path up to and including this one',
      unit: 'gate',
      empty: 'no gate has a level',
    },
    {
      title: 'Depth between registers',
      counts: registerDepths,
      first: 0,
      across: 'gates on the longest path from any register to the data of one',
      unit: 'register',
      empty: 'no register leads to another',
    },
  ];
  const height = PANEL_TOP + panels.length * PANEL_HEIGHT;
  const title = `Levels of logic in ${top}`;
  const description =
    `${counted(gates, 'gate')} on ${counted(depth, 'level')}; ` +
    `at most ${counted(deepest, 'gate')} between registers.`;
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${WIDTH} ${height}" width="${WIDTH}" height="${height}" role="img" aria-labelledby="plot-title plot-description">
<title id="plot-title">${escaped(title)}</title>
<desc id="plot-description">${escaped(description)}</desc>
<style>${STYLE}</style>
<rect class="ground" width="${WIDTH}" height="${height}"/>
<text class="title" x="${LEFT}" y="34">${escaped(title)}</text>
${panels.map((panel, i) => panelText(panel, PANEL_TOP + i * PANEL_HEIGHT)).join('\n')}
</svg>
`;
}

const STYLE = `
svg { background: #fbfaf7 }
.ground { fill: #fbfaf7 }
text { fill: #2c3138; font: 13px system-ui, sans-serif }
.title { font-size: 18px; font-weight: 600 }
.heading { font-size: 14px; font-weight: 600 }
.quiet { fill: #666d76; font-size: 12px }
.line { stroke: #d9d6cd; stroke-width: 1 }
.axis { stroke: #868d96; stroke-width: 1 }
.bar { fill: #3f7d83 }
@media (prefers-color-scheme: dark) {
svg { background: #17191d }
.ground { fill: #17191d }
text { fill: #e4e2dc }
.quiet { fill: #a3a8af }
.line { stroke: #33373e }
.axis { stroke: #7c828b }
.bar { fill: #6bb0b5 }
}
`;

function panelText(panel: Panel, top: number): string {
  const heading = `<text class="heading" x="${LEFT}" y="${top + 18}">${panel.title}</text>`;
  const bins = binned(panel.counts, panel.first, MOST_BARS);
  const most = bins.reduce((so, { count }) => Math.max(so, count), 0);
  const base = top + 36 + BARS;
  if (most === 0) {
    return `${heading}\n<text class="quiet" x="${LEFT}" y="${top + 44}">${panel.empty}</text>`;
  }
  const ceiling = ceilingOf(most);
  return [
    heading,
    ...gridLines(ceiling, base),
    ...bars(bins, panel, ceiling, base),
    `<line class="axis" x1="${LEFT}" y1="${base}" x2="${WIDTH - RIGHT}" y2="${base}"/>`,
    ...ticks(bins, base),
    text('quiet', LEFT + innerWidth / 2, base + 38, 'middle', panel.across),
    `<text class="quiet" text-anchor="middle" transform="translate(20 ${base - BARS / 2}) rotate(-90)">${panel.unit}s</text>`,
  ].join('\n');
}

const innerWidth = WIDTH - LEFT - RIGHT;

/** Horizontal lines at the quarters of the scale, or at each whole number of a low one. */
function gridLines(ceiling: number, base: number): string[] {
  const parts = Math.min(ceiling, 4);
  return Array.from({ length: parts + 1 }, (_, i) => {
    const y = round(base - (i / parts) * BARS);
    const line = `<line class="line" x1="${LEFT}" y1="${y}" x2="${WIDTH - RIGHT}" y2="${y}"/>`;
    const label = text('quiet', LEFT - 8, y + 4, 'end', figure((ceiling * i) / parts));
    return i === 0 ? label : line + label;
  });
}

function bars(bins: readonly Bin[], panel: Panel, ceiling: number, base: number): string[] {
  const step = innerWidth / bins.length;
  const gap = Math.min(step * 0.2, 6);
  const width = Math.min(step - gap, 56);
  return bins.map((bin, i) => {
    const height = (bin.count / ceiling) * BARS;
    // A single gate on a scale of a million is still to be seen.
    const shown = bin.count === 0 ? 0 : Math.max(height, 1);
    const x = round(LEFT + (i + 0.5) * step - width / 2);
    const tip = `${binLabel(bin)}: ${counted(bin.count, panel.unit)}`;
    return `<rect class="bar" x="${x}" y="${round(base - shown)}" width="${round(width)}" height="${round(shown)}"><title>${tip}</title></rect>`;
  });
}

/** Labels below the bars, as many as there is room for. */
function ticks(bins: readonly Bin[], base: number): string[] {
  const step = innerWidth / bins.length;
  const widest = Math.max(...bins.map((bin) => binLabel(bin).length)) * 7 + 12;
  const every = Math.ceil(widest / step);
  return bins.flatMap((bin, i) =>
    i % every === 0
      ? [text('quiet', LEFT + (i + 0.5) * step, base + 18, 'middle', binLabel(bin))]
      : [],
  );
}

const SCALE_ENDS = [1.2, 1.6, 2, 2.4, 3.2, 4, 6, 8, 10];

/** The end of a scale for a count: a number near it whose quarters are short whole numbers. */
function ceilingOf(most: number): number {
  for (let power = 1; ; power *= 10) {
    for (const step of power === 1 ? [1, 2, 3, 4, 8] : SCALE_ENDS) {
      if (step * power >= most) return step * power;
    }
  }
}

const text = (kind: string, x: number, y: number, anchor: string, content: string): string =>
  `<text class="${kind}" x="${round(x)}" y="${round(y)}" text-anchor="${anchor}">${content}</text>`;

const round = (value: number): number => Math.round(value * 100) / 100;

const escaped = (content: string): string =>
  content.replace(/[<>&"]/g, (character) => `&#${character.charCodeAt(0)};`);
