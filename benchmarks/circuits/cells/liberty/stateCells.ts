import type { ClockGateCell, FlopCell, LatchCell, Pin } from '../cell.js';
import { substituted } from '../expression.js';
import { bankPins, hasPin } from '../sequentialCells.js';
import { type Dialect, libertyFunction } from './functions.js';
import { pinGroup, stateTiming } from './pins.js';
import { checkTiming, delayTiming } from './tables.js';
import { group, type LibertyGroup, type LibertyItem, plain, quoted } from './text.js';

type StateCell = FlopCell | LatchCell;

/** What the cell of a flip-flop holds. */
export function flopItems(cell: FlopCell, dialect: Dialect): LibertyItem[] {
  const isRise = cell.edge === 'rise';
  const edge = isRise ? 'rising' : 'falling';
  const clocked = libertyFunction(isRise ? cell.clock : ['not', cell.clock], dialect);
  const next = libertyFunction(substituted(cell.next, { state: 'iq' }), dialect);
  const state = stateGroup('ff', cell, dialect, [
    quoted('clocked_on', clocked),
    quoted('next_state', next),
  ]);
  const checks = [`setup_${edge}`, `hold_${edge}`].map((type) => checkTiming(cell.clock, type));
  return [
    state,
    ...pinItems(cell, cell.clock, checks, stateTiming(cell, cell.clock, `${edge}_edge`)),
    ...(cell.hasScan ? [testCell(cell, state)] : []),
  ];
}

/** What the cell of a latch holds. */
export function latchItems(cell: LatchCell, dialect: Dialect): LibertyItem[] {
  const isHigh = cell.enable === 'g';
  const enable = libertyFunction(isHigh ? cell.enable : ['not', cell.enable], dialect);
  const state = stateGroup('latch', cell, dialect, [
    quoted('enable', enable),
    quoted('data_in', 'd'),
  ]);
  const closing = isHigh ? 'falling' : 'rising';
  const checks = [`setup_${closing}`, `hold_${closing}`].map((type) =>
    checkTiming(cell.enable, type),
  );
  const opening = isHigh ? 'rising_edge' : 'falling_edge';
  return [state, ...pinItems(cell, cell.enable, checks, stateTiming(cell, cell.enable, opening))];
}

/** What the cell of a clock gate holds: a state table, or a latch where there is no test. */
export function clockGateItems(cell: ClockGateCell): LibertyItem[] {
  const isRise = cell.edge === 'rise';
  const test = cell.test === 'none' ? '' : cell.test === 'before' ? '_precontrol' : '_postcontrol';
  const style = `${cell.hasLatch ? 'latch' : 'none'}_${isRise ? 'posedge' : 'negedge'}${test}`;
  const open = cell.hasLatch ? 'held' : 'en';
  const passed = cell.test === 'after' ? `(${open} + te)` : open;
  const is = isRise ? `ck * ${passed}` : `ck + !${passed}`;
  const output: Pin = { name: 'gck', direction: 'output', width: 1 };
  const timing = delayTiming(cell, 'ck', 'combinational', 'positive_unate');
  const checks = ['setup', 'hold'].map((type) =>
    checkTiming('ck', `${type}_${isRise ? 'rising' : 'falling'}`),
  );
  const usesTable = cell.hasLatch && cell.test !== 'none';
  return [
    quoted('clock_gating_integrated_cell', style),
    ...(usesTable ? stateTable(cell) : []),
    ...(cell.hasLatch && !usesTable ? [gateLatch(isRise)] : []),
    ...cell.pins.map((pin) => {
      if (pin.direction === 'output') {
        const attribute = usesTable ? 'state_function' : 'function';
        return pinGroup(output, plain('clock_gate_out_pin', 'true'), quoted(attribute, is), timing);
      }
      const [role, ...more] = gatePins[pin.name]!;
      return pinGroup(pin, plain(role, 'true'), ...(more.length > 0 ? checks : []));
    }),
  ];
}

const gatePins: Readonly<Record<string, readonly [role: string, ...more: string[]]>> = {
  ck: ['clock_gate_clock_pin'],
  en: ['clock_gate_enable_pin', 'checked'],
  te: ['clock_gate_test_pin', 'checked'],
};

function gateLatch(isRise: boolean): LibertyGroup {
  return group(
    'latch',
    'held, held_n',
    quoted('enable', isRise ? '!ck' : 'ck'),
    quoted('data_in', 'en'),
  );
}

/** The latch of a gate as a table of its inputs, the state before and the state after. */
function stateTable(cell: ClockGateCell): LibertyItem[] {
  const [open, shut] = cell.edge === 'rise' ? ['L', 'H'] : ['H', 'L'];
  const rows =
    cell.test === 'before'
      ? [`${open} L L : - : L`, `${open} L H : - : H`, `${open} H - : - : H`, `${shut} - - : - : N`]
      : [`${open} L : - : L`, `${open} H : - : H`, `${shut} - : - : N`];
  const columns = cell.test === 'before' ? 'ck en te' : 'ck en';
  return [
    group('statetable', `"${columns}", "held"`, `table : "${rows.join(', \\\n')}";`),
    group('pin', 'held', plain('direction', 'internal'), quoted('internal_node', 'held')),
  ];
}

function stateGroup(
  kind: 'ff' | 'latch',
  cell: StateCell,
  dialect: Dialect,
  items: readonly LibertyItem[],
): LibertyGroup {
  const controls = [
    ...(cell.clear ? [quoted('clear', libertyFunction(['not', 'clr_n'], dialect))] : []),
    ...(cell.preset ? [quoted('preset', libertyFunction(['not', 'set_n'], dialect))] : []),
  ];
  const [q, qn] = cell.wins === 'clear' ? 'LH' : 'HL';
  const both =
    controls.length < 2 ? [] : [plain('clear_preset_var1', q!), plain('clear_preset_var2', qn!)];
  const isBank = cell.bits > 1;
  const name = isBank ? `${kind}_bank` : kind;
  return group(name, `iq, iqn${isBank ? `, ${cell.bits}` : ''}`, ...items, ...controls, ...both);
}

/** The pins of a cell with state; the bits of a bundle stand inside of it. */
function pinItems(
  cell: StateCell,
  clock: string,
  checks: readonly LibertyItem[],
  delays: readonly LibertyItem[],
): LibertyItem[] {
  const banks = ['q', 'qn', 'd'];
  const inBanks = new Set(
    banks.flatMap((name) => bankPins(name, 'input', cell).map((pin) => pin.name)),
  );
  const rest = cell.pins.filter(({ name }) => !inBanks.has(name));
  return [
    ...banks.flatMap((name) => {
      const members = bankPins(name, name === 'd' ? 'input' : 'output', cell);
      if (!hasPin(cell, members[0]!.name)) return [];
      const items =
        name === 'd' ? checks : [quoted('function', name === 'q' ? 'iq' : 'iqn'), ...delays];
      return [
        members.length === 1 ? pinGroup(members[0]!, ...items) : bundle(name, members, items),
      ];
    }),
    ...rest.map((pin) => {
      if (pin.name === clock) return pinGroup(pin, plain('clock', 'true'));
      if (pin.name === 'clr_n' || pin.name === 'set_n') {
        return pinGroup(pin, checkTiming(clock, 'recovery_rising'));
      }
      return pinGroup(pin, ...scanRole(pin.name), ...checks);
    }),
  ];
}

function bundle(name: string, members: readonly Pin[], items: readonly LibertyItem[]) {
  const { direction } = members[0]!;
  const list = members.map((member) => member.name).join(', ');
  const pins = members.map((member) => group('pin', member.name, plain('capacitance', '0.0012')));
  return group(
    'bundle',
    name,
    `members (${list});`,
    plain('direction', direction),
    ...items,
    ...pins,
  );
}

function scanRole(pin: string): LibertyItem[] {
  if (pin === 'si') return [plain('nextstate_type', 'scan_in')];
  return pin === 'se' ? [plain('nextstate_type', 'scan_enable')] : [];
}

/** The cell as it is without its scan pins, for tools that insert scan. */
function testCell(cell: FlopCell, state: LibertyGroup): LibertyGroup {
  const signals: Readonly<Record<string, string>> = { si: 'test_scan_in', se: 'test_scan_enable' };
  return group(
    'test_cell',
    '',
    group(
      'ff',
      'iq, iqn',
      ...state.items.map((item) =>
        String(item).startsWith('next_state') ? quoted('next_state', 'd') : item,
      ),
    ),
    ...cell.pins.map(({ name, direction }) => {
      const signal = signals[name];
      const own =
        name === 'q' || name === 'qn' ? [quoted('function', name === 'q' ? 'iq' : 'iqn')] : [];
      return group(
        'pin',
        name,
        plain('direction', direction),
        ...own,
        ...(signal === undefined ? [] : [plain('signal_type', signal)]),
      );
    }),
  );
}
