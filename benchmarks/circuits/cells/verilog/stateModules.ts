import type { ClockGateCell, Controls, FlopCell, LatchCell } from '../cell.js';
import { bankPins, hasPin } from '../sequentialCells.js';
import { assigned, mux2Primitive } from './gates.js';
import { type Models, specify } from './modules.js';
import { flopPrimitive, latchPrimitive, type Primitive } from './primitives.js';
import { bitsOfPin, clockPaths, controlPaths, timingChecks } from './timing.js';

type StateCell = FlopCell | LatchCell;

/** The primitive behind a flip-flop: the enable is part of it unless a scan input comes after. */
export function primitiveOfFlop(cell: FlopCell): Primitive {
  const { clear, preset, wins } = cell;
  // Some falling-edge cells have a primitive of their own, others an inverter at the clock.
  const edge = isClockInverted(cell) ? 'rise' : cell.edge;
  return flopPrimitive({ clear, preset, wins, edge, hasEnable: cell.hasEnable && !cell.hasScan });
}

const isClockInverted = ({ edge, clear }: FlopCell): boolean => edge === 'fall' && clear;

/** The primitive behind a latch; one that is open at 0 has an inverter before it. */
export function primitiveOfLatch({ clear, preset, wins }: LatchCell): Primitive {
  return latchPrimitive({ clear, preset, wins });
}

/** The latch of a clock gate. */
export const gateLatch = latchPrimitive({ clear: false, preset: false, wins: 'clear' });

/** The models of a flip-flop. */
export function flopModels(cell: FlopCell): Models {
  const edge = cell.edge === 'rise' ? 'posedge' : 'negedge';
  // In the style with negative limits, the model reads nets that the timing checks drive.
  const delayed = cell.clear || cell.hasScan ? delayedName : undefined;
  const own = delayed ?? ((name: string) => name);
  const clock = isClockInverted(cell) ? 'ck' : own(cell.clock);
  const steps = dataSteps(cell, own);
  const controls = controlNames(cell);
  const terminals = [steps.data, ...steps.enable, clock, ...controls.map(own), 'notifier'];
  return {
    functional: [
      `reg ${range(cell.bits)}state;`,
      `always @(${[`${edge} ${cell.clock}`, ...controls.map((c) => `negedge ${c}`)].join(' or ')})`,
      ...controlled(cell, `state <= ${assigned(withData(cell))};`),
      ...outputAssigns(cell),
    ],
    timing: [
      'reg notifier;',
      `wire ${range(cell.bits)}state;`,
      ...(delayed === undefined ? [] : delayedWires(cell)),
      ...(isClockInverted(cell) ? [`wire ck;`, `not (ck, ${own(cell.clock)});`] : []),
      ...steps.lines,
      `${primitiveOfFlop(cell).name} #0 held${bankRange(cell)} (state, ${terminals.join(', ')});`,
      ...outputGates(cell),
      ...condition(cell),
      ...specify([
        ...clockPaths(cell, cell.clock, edge),
        ...controlPaths(cell),
        ...timingChecks({
          edge,
          clock: cell.clock,
          data: dataBits(cell, [cell.clock, ...controls]),
          controls,
          condition: controls.length > 0 ? 'is_free' : undefined,
          delayed,
        }),
      ]),
    ],
  };
}

/** The models of a latch. */
export function latchModels(cell: LatchCell): Models {
  const controls = controlNames(cell);
  const isLow = cell.enable === 'g_n';
  const terminals = [dataText(cell), 'g', ...controls, 'notifier'];
  const read = [cell.enable, ...dataBits(cell, [cell.enable])];
  const sensitivity = [...new Set(read.map((bit) => bit.replace(/\[.*/, '')))];
  return {
    functional: [
      `reg ${range(cell.bits)}state;`,
      `always @(${sensitivity.join(' or ')})`,
      ...controlled(cell, `if (${isLow ? '!g_n' : 'g'}) state <= ${dataText(cell)};`),
      ...outputAssigns(cell),
    ],
    timing: [
      'reg notifier;',
      `wire ${range(cell.bits)}state;`,
      ...(isLow ? ['wire g;', 'not (g, g_n);'] : []),
      `${primitiveOfLatch(cell).name} held${bankRange(cell)} (state, ${terminals.join(', ')});`,
      ...outputGates(cell),
      ...condition(cell),
      ...specify([
        ...clockPaths(cell, cell.enable, isLow ? 'negedge' : 'posedge'),
        ...controlPaths(cell),
        ...timingChecks({
          edge: isLow ? 'posedge' : 'negedge',
          clock: cell.enable,
          data: dataBits(cell, [cell.enable, ...controls]),
          controls,
          condition: controls.length > 0 ? 'is_free' : undefined,
          delayed: undefined,
        }),
      ]),
    ],
  };
}

/** The models of a clock gate. */
export function gateModels(cell: ClockGateCell): Models {
  const isRise = cell.edge === 'rise';
  const wanted = cell.test === 'before' ? 'en | te' : 'en';
  const open = cell.hasLatch ? 'state' : 'en';
  const passed = cell.test === 'after' ? `(${open} | te)` : open;
  const latch = ['reg state;', `always @*`, `  if (${isRise ? '!ck' : 'ck'}) state = ${wanted};`];
  return {
    functional: [
      ...(cell.hasLatch ? latch : []),
      `assign gck = ${isRise ? `ck & ${passed}` : `ck | ~${passed}`};`,
    ],
    timing: [
      ...(cell.hasLatch ? gateLatchLines(cell) : []),
      ...(cell.test === 'after' ? ['wire passed;', `or (passed, ${open}, te);`] : []),
      ...gateOutput(isRise, cell.test === 'after' ? 'passed' : open),
      ...specify([
        `(ck +=> gck) = (0.060, 0.070);`,
        `$setuphold(${isRise ? 'posedge' : 'negedge'} ck, posedge en, 0.050, 0.010);`,
      ]),
    ],
  };
}

function gateLatchLines(cell: ClockGateCell): string[] {
  const isRise = cell.edge === 'rise';
  return [
    'reg notifier;',
    'wire state, open, wanted;',
    isRise ? 'not (open, ck);' : 'buf (open, ck);',
    cell.test === 'before' ? 'or (wanted, en, te);' : 'buf (wanted, en);',
    `${gateLatch.name} held (state, wanted, open, notifier);`,
  ];
}

function gateOutput(isRise: boolean, passed: string): string[] {
  if (isRise) return [`and (gck, ck, ${passed});`];
  return ['wire stopped;', `not (stopped, ${passed});`, 'or (gck, ck, stopped);'];
}

/** What stands before the primitive's data pin, and what is left for its enable pin. */
function dataSteps(cell: FlopCell, own: (name: string) => string) {
  const lines: string[] = [];
  let data = dataText(cell, own);
  const step = (wire: string, text: string): void => {
    lines.push(`wire ${wire};`, text);
    data = wire;
  };
  if (hasPin(cell, 'rst_n')) step('cleared', `and (cleared, ${data}, ${own('rst_n')});`);
  if (cell.hasEnable && cell.hasScan) {
    step('kept', `${mux2Primitive} (kept, ${own('en')}, state, ${data});`);
  }
  if (cell.hasScan) step('next', `${mux2Primitive} (next, ${own('se')}, ${data}, ${own('si')});`);
  return { lines, data, enable: cell.hasEnable && !cell.hasScan ? [own('en')] : [] };
}

const range = (bits: number): string => (bits === 1 ? '' : `[${bits - 1}:0] `);
const bankRange = ({ bits }: StateCell): string => (bits === 1 ? '' : ` [${bits - 1}:0]`);

const delayedName = (bit: string): string => `delayed_${bit}`;

function delayedWires(cell: FlopCell): string[] {
  return cell.pins
    .filter(({ direction }) => direction === 'input')
    .map(({ name, width }) => `wire ${range(width)}${delayedName(name)};`);
}

function dataText(cell: StateCell, own: (name: string) => string = (name) => name): string {
  const names = bankPins('d', 'input', cell).map(({ name }) => own(name));
  return names.length === 1 ? names[0]! : `{${names.toReversed().join(', ')}}`;
}

function withData(cell: FlopCell) {
  return cell.next === 'd' ? dataText(cell) : cell.next;
}

function controlNames({ clear, preset }: Controls): string[] {
  return [...(preset ? ['set_n'] : []), ...(clear ? ['clr_n'] : [])];
}

function dataBits(cell: StateCell, others: readonly string[]): string[] {
  return cell.pins
    .filter(({ name, direction }) => direction === 'input' && !others.includes(name))
    .flatMap(bitsOfPin);
}

/** A statement behind the tests of clear and preset, in their order. */
function controlled(cell: StateCell, statement: string): string[] {
  const zeros = `${cell.bits}'b0`;
  const tests = [
    ...(cell.clear ? [`if (!clr_n) state <= ${zeros};`] : []),
    ...(cell.preset ? [`if (!set_n) state <= ~${zeros};`] : []),
  ];
  const ordered = cell.wins === 'clear' ? tests : tests.toReversed();
  return [...ordered, statement].map((line, i) => `  ${i === 0 ? '' : 'else '}${line}`);
}

function outputAssigns(cell: StateCell): string[] {
  return outputBits(cell).map(([pin, state, inverted]) => {
    return `assign ${pin} = ${inverted ? '~' : ''}${state};`;
  });
}

function outputGates(cell: StateCell): string[] {
  return outputBits(cell).map(([pin, state, inverted], i) => {
    const array = cell.form === 'bus' && cell.bits > 1 ? ` outlet_${i}${bankRange(cell)}` : '';
    return `${inverted ? 'not' : 'buf'}${array} (${pin}, ${state});`;
  });
}

/** Output pin, the state behind it, and whether it is inverted. */
function outputBits(cell: StateCell): [string, string, boolean][] {
  return ['q', 'qn'].flatMap((name) =>
    bankPins(name, 'output', cell)
      .filter((pin) => hasPin(cell, pin.name))
      .map((pin, i): [string, string, boolean] => {
        const isBit = cell.form === 'bundle' && cell.bits > 1;
        return [pin.name, isBit ? `state[${i}]` : 'state', name === 'qn'];
      }),
  );
}

function condition(cell: StateCell): string[] {
  const controls = controlNames(cell);
  if (controls.length === 0) return [];
  return [
    'wire is_free;',
    `${controls.length === 1 ? 'buf' : 'and'} (is_free, ${controls.join(', ')});`,
  ];
}
