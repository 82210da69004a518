import type { BenchEngine, BenchResult } from '../benchResult.js';
import { STYLE } from './pictureStyle.js';
import { type BenchSuite, speedOver } from './suite.js';

const WIDTH = 860;
const LEFT = 128;
const RIGHT = 128;
const TOP = 124;
const ROW = 44;
const FOOT = 92;

/** The yardstick, at 1, and what is set against it, in the order of the legend. */
const YARDSTICK: BenchEngine = 'native';
const marks: readonly {
  readonly engine: BenchEngine;
  readonly label: string;
}[] = [
  { engine: 'table', label: 'by table (another algorithm)' },
  { engine: 'wasm', label: 'generated code' },
  { engine: 'nativeMarch', label: 'C for this machine' },
  { engine: 'bytecode', label: 'bytecode' },
  { engine: 'reference', label: 'reference' },
];

/** From left to right on a logarithmic scale, in powers of ten. */
interface Scale {
  readonly low: number;
  readonly high: number;
}

/**
 * How many times as fast as C at optimization level 2 each engine is, one line a circuit, as one SVG
 * picture on a logarithmic scale. It carries its own light and dark colours, and no script.
 *
 * Throws RangeError where no circuit was measured in C.
 */
export function benchPicture({ machine, circuits, means }: BenchSuite): string {
  const shown = circuits.filter(({ engines }) => engines[YARDSTICK] !== undefined);
  if (shown.length === 0) {
    throw new RangeError('a picture compares with native C, which was measured for no circuit');
  }
  const height = TOP + shown.length * ROW + FOOT;
  const base = TOP + shown.length * ROW;
  const scale = scaleOf(shown);
  const title = 'Speed over native C of the same netlist';
  const mean =
    means.asRun === undefined ? '' : `; as run, ${figure(means.asRun)} in the geometric mean`;
  const description = `${shown.map(lineText).join(' ')}${means.asRun === undefined ? '' : ` Geometric mean as run: ${figure(means.asRun)}.`}`;
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${WIDTH} ${height}" width="${WIDTH}" height="${height}" role="img" aria-labelledby="bench-title bench-description">
<title id="bench-title">${escaped(title)}</title>
<desc id="bench-description">${escaped(description)}</desc>
<style>${STYLE}</style>
<rect class="ground" width="${WIDTH}" height="${height}"/>
<text class="title" x="${LEFT}" y="34">${escaped(title)}</text>
<text class="quiet" x="${LEFT}" y="56">1 is straight-line C under -O2, further right is faster${escaped(mean)}</text>
${legend(shown)}
${gridLines(scale, base)}
${shown.map((result, i) => rowText(result, TOP + (i + 0.5) * ROW, scale)).join('\n')}
${label('quiet', (LEFT + WIDTH - RIGHT) / 2, base + 42, 'middle', 'times as fast (logarithmic scale)')}
${label('quiet', LEFT, base + 74, 'start', `Best bursts on ${machine.cores} cores of ${machine.processor}, Node ${machine.node}; responses equal in all engines.`)}
</svg>
`;
}

function scaleOf(circuits: readonly BenchResult[]): Scale {
  const speeds = circuits.flatMap((result) =>
    marks.flatMap(({ engine }) => speedOver(result, YARDSTICK, engine) ?? []),
  );
  return {
    low: Math.floor(Math.log10(Math.min(...speeds, 0.1))),
    high: Math.ceil(Math.log10(Math.max(...speeds, 10))),
  };
}

const xOf = ({ low, high }: Scale, speed: number): number =>
  LEFT + ((Math.log10(speed) - low) / (high - low)) * (WIDTH - RIGHT - LEFT);

/** Samples of the marks that occur, and what they stand for. */
function legend(circuits: readonly BenchResult[]): string {
  let x = LEFT;
  return marks
    .filter(({ engine }) => circuits.some(({ engines }) => engines[engine] !== undefined))
    .map(({ engine, label: content }) => {
      const sample = `${mark(engine, x + 7, 84)}${label('', x + 20, 88, 'start', content)}`;
      x += 40 + 7 * content.length;
      return sample;
    })
    .join('\n');
}

function gridLines(scale: Scale, base: number): string {
  const powers = Array.from({ length: scale.high - scale.low + 1 }, (_, i) => scale.low + i);
  return powers
    .map((power) => {
      const x = round(xOf(scale, 10 ** power));
      const kind = power === 0 ? 'mark' : 'line';
      const line = `<line class="${kind}" x1="${x}" y1="${TOP - 8}" x2="${x}" y2="${base}"/>`;
      return line + label('quiet', x, base + 20, 'middle', figure(10 ** power));
    })
    .join('\n');
}

// A bar from the yardstick to what a run uses; the others are points on the line.
function rowText(result: BenchResult, y: number, scale: Scale): string {
  const speeds = marks.flatMap(({ engine, label: what }) => {
    const speed = speedOver(result, YARDSTICK, engine);
    return speed === undefined ? [] : [{ engine, what, speed }];
  });
  const used = speeds.find(({ engine }) => engine === 'table' || engine === 'wasm');
  const parts = [label('', LEFT - 14, y + 4, 'end', result.circuit)];
  if (used !== undefined) {
    const [from, to] = [xOf(scale, 1), xOf(scale, used.speed)];
    const [x, width] = [Math.min(from, to), Math.abs(to - from)];
    parts.push(
      `<rect class="bar" x="${round(x)}" y="${round(y - 9)}" width="${round(width)}" height="18"/>`,
      label('figure', WIDTH - RIGHT + 14, y + 4, 'start', `${figure(used.speed)} times`),
    );
  }
  for (const { engine, what, speed } of speeds.toReversed()) {
    const tip = `<title>${escaped(`${result.circuit}: ${what}, ${figure(speed)} times`)}</title>`;
    parts.push(`<g>${tip}${mark(engine, xOf(scale, speed), y)}</g>`);
  }
  return parts.join('\n');
}

function mark(engine: BenchEngine, x: number, y: number): string {
  const [at, middle] = [round(x), round(y)];
  if (engine === 'wasm') return `<circle class="wasm" cx="${at}" cy="${middle}" r="6"/>`;
  if (engine === 'table') {
    return `<path class="table" d="M${at} ${middle - 8}l8 8l-8 8l-8 -8z"/>`;
  }
  if (engine === 'nativeMarch') {
    return `<path class="native" d="M${at} ${middle - 8}v16"/>`;
  }
  return `<circle class="${engine}" cx="${at}" cy="${middle}" r="4"/>`;
}

function lineText(result: BenchResult): string {
  const speeds = marks.flatMap(({ engine, label: what }) => {
    const speed = speedOver(result, YARDSTICK, engine);
    return speed === undefined ? [] : [`${what} ${figure(speed)}`];
  });
  return `${result.circuit}: ${speeds.join(', ')}.`;
}

const figure = (value: number): string =>
  value >= 100 ? String(Math.round(value)) : String(Number(value.toPrecision(2)));

const label = (kind: string, x: number, y: number, anchor: string, content: string): string => {
  const of = kind === '' ? '' : ` class="${kind}"`;
  return `<text${of} x="${round(x)}" y="${round(y)}" text-anchor="${anchor}">${escaped(content)}</text>`;
};

const round = (value: number): number => Math.round(value * 100) / 100;

const escaped = (content: string): string =>
  content.replace(/[<>&"]/g, (character) => `&#${character.charCodeAt(0)};`);
