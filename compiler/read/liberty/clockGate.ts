import type { LibertyPin, LibertyState } from './cell.js';
import type { CellDraft } from './draft.js';
import type { LibertyGroup, LibertyText } from './syntax.js';
import { wordsOf } from './words.js';

// With a latch or without, the edge of the registers behind it, where a test pin comes in, and
// whether there is a pin to observe the enable by.
const kinds = /^(latch|none)_(pos|neg)edge(?:_(pre|post)?control)?(?:_obs)?$/;

/**
 * Gives an integrated clock gate the logic that `clock_gating_integrated_cell` and the marks of its
 * pins stand for, where the library tells nothing else; returns its latch, if it has one.
 *
 * Before rising edges the clock passes an AND gate, and the latch is open while it is low; before
 * falling edges an OR gate, while it is high. A test pin opens the gate before the latch (precontrol)
 * or behind it (postcontrol). From memory of the attributes' description in Liberty; that a gate
 * must pass the clock while it is enabled, and may not cut a pulse short, leaves no other choice.
 */
export function readClockGate(draft: CellDraft, group: LibertyGroup): LibertyState[] {
  const kind = group.attributes.get('clock_gating_integrated_cell')?.[0];
  const [, storage, edge, control] = kinds.exec(kind?.text.trim() ?? '') ?? [];
  const place = draft.pins.findIndex(({ name }) => name === markedPin(group, 'out'));
  const output = draft.pins[place];
  const clock = markedPin(group, 'clock');
  const enable = markedPin(group, 'enable');
  if (kind === undefined || storage === undefined || hasLogic(group, output)) return [];
  if (output === undefined || clock === undefined || enable === undefined) return [];
  const test = markedPin(group, 'test');
  const before = test !== undefined && control !== 'post' ? `${enable} + ${test}` : enable;
  const state = freeName(draft);
  const held = storage === 'latch' ? state : `(${before})`;
  const opened = test !== undefined && control === 'post' ? `(${held} + ${test})` : held;
  const isRising = edge === 'pos';
  const text = (of: string): LibertyText => ({ ...kind, text: of });
  const passed = isRising ? `${clock} * ${opened}` : `${clock} + !${opened}`;
  draft.pins[place] = { ...output, function: text(passed) };
  if (storage === 'none') return [];
  const functions = new Map([
    ['enable', text(isRising ? `!${clock}` : clock)],
    ['data_in', text(before)],
  ]);
  const names = { name: state, inverse: '', width: undefined };
  const both = { bothState: undefined, bothInverse: undefined };
  return [{ kind: 'latch', ...names, functions, ...both, start: kind.start, end: kind.end }];
}

/** The pin that says of itself what part it has in a clock gate. */
function markedPin(group: LibertyGroup, part: string): string | undefined {
  const pin = group.groups.find(({ kind, attributes }) => {
    const mark = kind === 'pin' ? attributes.get(`clock_gate_${part}_pin`)?.[0] : undefined;
    return mark?.text.trim().toLowerCase() === 'true';
  });
  return pin && wordsOf(pin.names[0]?.text ?? '')[0];
}

function hasLogic({ groups }: LibertyGroup, output: LibertyPin | undefined): boolean {
  const isState = groups.some(({ kind }) => kind === 'statetable' || kind === 'latch');
  return isState || [output?.function, output?.stateFunction, output?.internalNode].some(Boolean);
}

function freeName({ pins }: CellDraft): string {
  let name = 'latched_enable';
  while (pins.some((pin) => pin.name === name)) name += '_';
  return name;
}
