import {
  type BankForm,
  type Cell,
  type ClockGateCell,
  type Controls,
  cellName,
  type FlopCell,
  inputs,
  type LatchCell,
  outputs,
  type Pin,
} from './cell.js';
import { type Expression, expression } from './expression.js';

/** The rows' last words: what the family has beside clock or enable, data and outputs. */
type Row = readonly [family: string, drives: string, features: string];

// 'sync' is a synchronous clear; 'preset wins' tells of both at once; 'alone' lacks `qn`.
const flopRows: readonly Row[] = [
  ['flop', '1 2', ''],
  ['flop_alone', '1', 'alone'],
  ['flop_clear', '1 2', 'clear'],
  ['flop_preset', '1', 'preset'],
  ['flop_preset_clear', '1', 'preset clear'],
  ['flop_sync_clear', '1', 'sync'],
  ['flop_enable', '1 2', 'enable'],
  ['flop_enable_clear', '1', 'enable clear'],
  ['flop_enable_preset', '1', 'enable preset'],
  ['flop_scan', '1 2', 'scan'],
  ['flop_scan_clear', '1', 'scan clear'],
  ['flop_scan_preset', '1', 'scan preset'],
  ['flop_scan_preset_clear', '1', 'scan preset clear'],
  ['flop_scan_enable', '1', 'scan enable'],
  ['flop_scan_enable_clear', '1', 'scan enable clear'],
  ['flop_fall', '1', 'fall'],
  ['flop_fall_clear', '1', 'fall clear'],
  ['flop_fall_preset_clear', '1', 'fall preset clear wins'],
  ['flop_fall_scan', '1', 'fall scan'],
  ['flop_pair', '1', 'bundle2'],
  ['flop_bank4', '1', 'bus4 clear'],
  ['flop_bank8', '1', 'bus8 enable alone'],
];

const latchRows: readonly Row[] = [
  ['latch', '1 2', ''],
  ['latch_clear', '1', 'clear'],
  ['latch_preset', '1', 'preset'],
  ['latch_preset_clear', '1', 'preset clear'],
  ['latch_low', '1', 'low'],
  ['latch_low_clear', '1', 'low clear'],
  ['latch_low_preset_clear', '1', 'low preset clear wins'],
  ['latch_bank4', '1', 'bus4'],
];

const gateRows: readonly Row[] = [
  ['gate', '1 4', ''],
  ['gate_test', '2', 'before'],
  ['gate_test_after', '2', 'after'],
  ['gate_fall', '2', 'fall'],
  ['gate_fall_test', '2', 'fall before'],
  ['gate_open', '2', 'open'],
];

const expanded = (rows: readonly Row[]) =>
  rows.flatMap(([family, drives, features]) =>
    drives.split(' ').map((digit) => {
      const drive = Number(digit);
      return { name: cellName(family, drive), family, drive, has: new Set(features.split(' ')) };
    }),
  );

function controlsOf(has: ReadonlySet<string>): Controls {
  const wins = has.has('wins') ? 'preset' : 'clear';
  return { clear: has.has('clear'), preset: has.has('preset'), wins };
}

const controlPins = ({ clear, preset }: Controls): string[] => [
  ...(preset ? ['set_n'] : []),
  ...(clear ? ['clr_n'] : []),
];

function bankOf(has: ReadonlySet<string>): { readonly bits: number; readonly form: BankForm } {
  for (const feature of has) {
    const [, form, bits] = /^(bus|bundle)(\d+)$/.exec(feature) ?? [];
    if (form !== undefined) return { bits: Number(bits), form: form as BankForm };
  }
  return { bits: 1, form: 'bus' };
}

/** The pins that `name` stands for in a cell of several bits. */
export function bankPins(
  name: string,
  direction: Pin['direction'],
  { bits, form }: { readonly bits: number; readonly form: BankForm },
): Pin[] {
  if (form === 'bus') return [{ name, direction, width: bits }];
  return Array.from({ length: bits }, (_, i) => ({ name: `${name}${i}`, direction, width: 1 }));
}

/** The flip-flops. */
export const flopCells: readonly FlopCell[] = expanded(flopRows).map(({ has, ...named }) => {
  const controls = controlsOf(has);
  const bank = bankOf(has);
  const edge = has.has('fall') ? 'fall' : 'rise';
  const clock = edge === 'fall' ? 'ck_n' : 'ck';
  const hasEnable = has.has('enable');
  const hasScan = has.has('scan');
  let next: Expression = has.has('sync') ? expression('and d rst_n') : 'd';
  if (hasEnable) next = ['mux', 'en', 'state', next];
  if (hasScan) next = ['mux', 'se', next, 'si'];
  const pins = [
    ...bankPins('q', 'output', bank),
    ...(has.has('alone') ? [] : bankPins('qn', 'output', bank)),
    ...inputs(clock),
    ...bankPins('d', 'input', bank),
    ...inputs(...(has.has('sync') ? ['rst_n'] : [])),
    ...inputs(...(hasEnable ? ['en'] : []), ...(hasScan ? ['si', 'se'] : [])),
    ...inputs(...controlPins(controls)),
  ];
  return {
    kind: 'flop',
    ...named,
    ...controls,
    ...bank,
    ...{ edge, clock, hasEnable, hasScan, next, pins },
  };
});

/** The transparent latches. */
export const latchCells: readonly LatchCell[] = expanded(latchRows).map(({ has, ...named }) => {
  const controls = controlsOf(has);
  const bank = bankOf(has);
  const enable = has.has('low') ? 'g_n' : 'g';
  const pins = [
    ...bankPins('q', 'output', bank),
    ...bankPins('qn', 'output', bank),
    ...inputs(enable),
    ...bankPins('d', 'input', bank),
    ...inputs(...controlPins(controls)),
  ];
  return { kind: 'latch', ...named, ...controls, ...bank, enable, pins };
});

/** The clock gates. */
export const clockGateCells: readonly ClockGateCell[] = expanded(gateRows).map(
  ({ has, ...named }) => {
    const test = has.has('before') ? 'before' : has.has('after') ? 'after' : 'none';
    return {
      kind: 'clockGate',
      ...named,
      edge: has.has('fall') ? 'fall' : 'rise',
      test,
      hasLatch: !has.has('open'),
      pins: [...outputs('gck'), ...inputs('ck', 'en', ...(test === 'none' ? [] : ['te']))],
    };
  },
);

/** Whether the cell has a pin of that name. */
export const hasPin = ({ pins }: Cell, name: string): boolean =>
  pins.some((pin) => pin.name === name);
