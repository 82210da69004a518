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
const ROUND = 3;

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
    const text = cycle.toLocaleString('en-US');
    if (x + 3 + context.measureText(text).width > width) break;
    context.fillText(text, x + 3, ROW_HEIGHT / 2);
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

interface Stretch {
  readonly value: Value | undefined;
  /** Where it begins and ends, in pixels. */
  readonly left: number;
  readonly right: number;
}

/** The stretches of cycles over which a value stays. */
function stretches(values: Track['values'], cycleWidth: number): Stretch[] {
  const found: Stretch[] = [];
  for (let start = 0; start < values.length; ) {
    let end = start + 1;
    while (end < values.length && values[end] === values[start]) end++;
    found.push({ value: values[start], left: start * cycleWidth, right: end * cycleWidth });
    start = end;
  }
  return found;
}

function drawBit(
  context: CanvasRenderingContext2D,
  { cycleWidth }: Scene,
  colours: Colours,
  { values }: Track,
  top: number,
): void {
  context.fillStyle = colours.fill;
  const path = new Path2D();
  let before: Value | undefined;
  for (const { value, left, right } of stretches(values, cycleWidth)) {
    if (value === 0 || value === 1) {
      const y = top + (value === 1 ? HIGH : LOW);
      if (before === undefined || before === 'x') path.moveTo(left, y);
      else path.lineTo(left, y);
      path.lineTo(right, y);
      if (value === 1) context.fillRect(left, top + HIGH, right - left, LOW - HIGH);
    } else if (value === 'x') {
      context.save();
      hatch(context, colours, left, right, top);
      context.restore();
    }
    before = value;
  }
  context.lineWidth = 1.75;
  context.strokeStyle = colours.wave;
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
  context.font = '11.5px ui-monospace, monospace';
  for (const { value, left, right } of stretches(values, cycleWidth)) {
    if (value === undefined) continue;
    const isUnknown = typeof value === 'string';
    box(context, left, right, top);
    context.fillStyle = isUnknown ? colours.now : colours.fill;
    context.fill();
    context.lineWidth = 1.25;
    context.strokeStyle = isUnknown ? colours.unknown : colours.wave;
    context.stroke();
    const text = /^0bx+$/.test(`${value}`) ? 'x' : shownValue(value, signal.width, base);
    label(context, colours, text, left, right, top);
  }
}

/** A box with round corners, a little apart from its neighbours. */
function box(context: CanvasRenderingContext2D, left: number, right: number, top: number): void {
  const gap = Math.min(0.75, (right - left) / 8);
  const width = right - left - 2 * gap;
  context.beginPath();
  context.roundRect(left + gap, top + HIGH, width, LOW - HIGH, Math.min(ROUND, width / 2));
}

function label(
  context: CanvasRenderingContext2D,
  colours: Colours,
  text: string,
  left: number,
  right: number,
  top: number,
): void {
  const room = right - left - 2 * ROUND - 2;
  // Of a long number the end is seen: it is what changes, and the whole stands beside the name.
  const most = Math.floor(room / context.measureText('0').width);
  const shown = text.length <= most ? text : most >= 3 ? `…${text.slice(1 - most)}` : '';
  if (shown === '') return;
  context.fillStyle = colours.ink;
  context.fillText(shown, (left + right) / 2, top + (HIGH + LOW) / 2 + 0.5);
}

function hatch(
  context: CanvasRenderingContext2D,
  colours: Colours,
  left: number,
  right: number,
  top: number,
): void {
  context.strokeStyle = colours.unknown;
  context.fillStyle = colours.now;
  context.lineWidth = 1;
  context.beginPath();
  context.rect(left, top + HIGH, right - left, LOW - HIGH);
  context.fill();
  context.stroke();
  context.clip();
  context.beginPath();
  for (let from = left - (left % 6) - 18; from < right; from += 6) {
    context.moveTo(from, top + LOW);
    context.lineTo(from + LOW - HIGH, top + HIGH);
  }
  context.stroke();
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

const dark = matchMedia('(prefers-color-scheme: dark)');
let known: { readonly scheme: boolean; readonly colours: Colours } | undefined;

function coloursOf(canvas: HTMLCanvasElement): Colours {
  const scheme = dark.matches;
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
