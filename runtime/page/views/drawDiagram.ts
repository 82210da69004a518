import type { Value } from '../../model/values.js';
import type { Signal } from '../signals.js';
import { type Base, shownValue } from '../valueBase.js';

/** Height of the ruler and of each signal's row. */
export const ROW_HEIGHT = 28;

/** A signal and its values in the cycles of the picture; undefined where one is not known. */
export interface Track {
  readonly signal: Signal;
  readonly values: readonly (Value | undefined)[];
}

/** What a picture shows. */
export interface Scene {
  readonly tracks: readonly Track[];
  /** Number of the leftmost cycle; may be negative. */
  readonly first: number;
  /** In CSS pixels. */
  readonly width: number;
  readonly cycleWidth: number;
  readonly cursor: number | undefined;
  readonly now: number;
  readonly base: Base;
}

interface Colours {
  readonly ink: string;
  readonly quiet: string;
  readonly line: string;
  readonly wave: string;
  readonly fill: string;
  readonly unknown: string;
  readonly now: string;
}

const LOW = 21;
const HIGH = 7;
const SLANT = 3;

/** Draws a timing diagram. Colours come from the style of the page. */
export function drawDiagram(canvas: HTMLCanvasElement, scene: Scene): void {
  const height = ROW_HEIGHT * (scene.tracks.length + 1);
  const scale = window.devicePixelRatio || 1;
  const [width, depth] = [Math.round(scene.width * scale), Math.round(height * scale)];
  if (canvas.width !== width || canvas.height !== depth) {
    canvas.width = width;
    canvas.height = depth;
  }
  const context = canvas.getContext('2d');
  if (context === null) return;
  const colours = coloursOf(canvas);
  context.setTransform(scale, 0, 0, scale, 0, 0);
  context.clearRect(0, 0, scene.width, height);
  context.font = '12px system-ui, sans-serif';
  context.textBaseline = 'middle';
  drawGround(context, scene, colours, height);
  for (const [i, track] of scene.tracks.entries()) {
    const top = ROW_HEIGHT * (i + 1);
    if (track.signal.width === 1) drawBit(context, scene, colours, track, top);
    else drawWord(context, scene, colours, track, top);
  }
}

function drawGround(
  context: CanvasRenderingContext2D,
  { first, width, cycleWidth, cursor, now, tracks }: Scene,
  colours: Colours,
  height: number,
): void {
  context.lineWidth = 1;
  context.strokeStyle = colours.line;
  context.fillStyle = colours.quiet;
  context.textAlign = 'left';
  const step = niceStep(64 / cycleWidth);
  for (let cycle = Math.max(0, Math.ceil(first / step) * step); ; cycle += step) {
    const x = Math.round((cycle - first) * cycleWidth) + 0.5;
    if (x > width) break;
    line(context, x, ROW_HEIGHT - 6, x, height);
    context.fillText(cycle.toLocaleString('en-US'), x + 3, ROW_HEIGHT / 2);
  }
  for (let i = 1; i <= tracks.length; i++) {
    line(context, 0, ROW_HEIGHT * i + 0.5, width, ROW_HEIGHT * i + 0.5);
  }
  // The present cycle is not over: its clock has not ticked.
  const x = (now - first) * cycleWidth;
  context.fillStyle = colours.now;
  context.fillRect(x, ROW_HEIGHT, cycleWidth, height);
  if (cursor === undefined) return;
  context.strokeStyle = colours.ink;
  const at = Math.round((cursor - first + 0.5) * cycleWidth) + 0.5;
  context.setLineDash([3, 3]);
  line(context, at, ROW_HEIGHT, at, height);
  context.setLineDash([]);
}

function drawBit(
  context: CanvasRenderingContext2D,
  { cycleWidth }: Scene,
  colours: Colours,
  { values }: Track,
  top: number,
): void {
  context.lineWidth = 1.75;
  context.strokeStyle = colours.wave;
  context.fillStyle = colours.fill;
  const path = new Path2D();
  let before: Value | undefined;
  for (const [i, value] of values.entries()) {
    const x = i * cycleWidth;
    if (value === 'x') {
      hatch(context, colours, x, top, cycleWidth);
    } else if (value !== undefined) {
      const y = top + (value === 1 ? HIGH : LOW);
      if (before === undefined || before === 'x') path.moveTo(x, y);
      else path.lineTo(x, y);
      path.lineTo(x + cycleWidth, y);
      if (value === 1) context.fillRect(x, top + HIGH, cycleWidth, LOW - HIGH);
    }
    before = value;
  }
  context.stroke(path);
}

function drawWord(
  context: CanvasRenderingContext2D,
  { cycleWidth, base }: Scene,
  colours: Colours,
  { values, signal }: Track,
  top: number,
): void {
  context.textAlign = 'center';
  for (let start = 0; start < values.length; ) {
    const value = values[start];
    let end = start + 1;
    while (end < values.length && values[end] === value) end++;
    if (value !== undefined) {
      const [left, right] = [start * cycleWidth, end * cycleWidth];
      const isUnknown = typeof value === 'string';
      lozenge(context, colours, left, right, top, isUnknown);
      label(context, colours, shownValue(value, signal.width, base), left, right, top);
    }
    start = end;
  }
}

function lozenge(
  context: CanvasRenderingContext2D,
  colours: Colours,
  left: number,
  right: number,
  top: number,
  isUnknown: boolean,
): void {
  const slant = Math.min(SLANT, (right - left) / 2);
  const middle = top + (HIGH + LOW) / 2;
  context.beginPath();
  context.moveTo(left, middle);
  context.lineTo(left + slant, top + HIGH);
  context.lineTo(right - slant, top + HIGH);
  context.lineTo(right, middle);
  context.lineTo(right - slant, top + LOW);
  context.lineTo(left + slant, top + LOW);
  context.closePath();
  context.fillStyle = isUnknown ? colours.now : colours.fill;
  context.fill();
  context.lineWidth = 1.5;
  context.strokeStyle = isUnknown ? colours.unknown : colours.wave;
  context.stroke();
}

function label(
  context: CanvasRenderingContext2D,
  colours: Colours,
  text: string,
  left: number,
  right: number,
  top: number,
): void {
  const room = right - left - 2 * SLANT - 2;
  if (room < 8) return;
  const most = Math.floor(room / 7);
  const shown = text.length <= most ? text : most >= 3 ? `${text.slice(0, most - 1)}…` : '';
  if (shown === '') return;
  context.fillStyle = colours.ink;
  context.fillText(shown, (left + right) / 2, top + (HIGH + LOW) / 2 + 0.5);
}

function hatch(
  context: CanvasRenderingContext2D,
  colours: Colours,
  x: number,
  top: number,
  width: number,
): void {
  context.save();
  context.strokeStyle = colours.unknown;
  context.lineWidth = 1;
  context.beginPath();
  context.rect(x, top + HIGH, width, LOW - HIGH);
  context.clip();
  for (let from = x - 14 - ((x - 14) % 5); from < x + width; from += 5) {
    context.moveTo(from, top + LOW);
    context.lineTo(from + LOW - HIGH, top + HIGH);
  }
  context.stroke();
  context.restore();
}

function line(context: CanvasRenderingContext2D, ...[x1, y1, x2, y2]: number[]): void {
  context.beginPath();
  context.moveTo(x1!, y1!);
  context.lineTo(x2!, y2!);
  context.stroke();
}

/** The least of 1, 2, 5, 10, 20, … that is not below `least`. */
function niceStep(least: number): number {
  for (let power = 1; ; power *= 10) {
    for (const step of [1, 2, 5]) if (step * power >= least) return step * power;
  }
}

let known: { readonly scheme: boolean; readonly colours: Colours } | undefined;

function coloursOf(canvas: HTMLCanvasElement): Colours {
  const scheme = matchMedia('(prefers-color-scheme: dark)').matches;
  if (known?.scheme === scheme) return known.colours;
  const style = getComputedStyle(canvas);
  const colour = (name: string): string => style.getPropertyValue(`--${name}`).trim();
  const colours = {
    ink: colour('ink'),
    quiet: colour('quiet'),
    line: colour('line'),
    wave: colour('wave'),
    fill: colour('wave-fill'),
    unknown: colour('alarm'),
    now: colour('now'),
  };
  known = { scheme, colours };
  return colours;
}
