import { MAX_BITS, wholeNumber } from './bitRange.js';
import type { BothActive, LibertyState } from './cell.js';
import type { CellDraft } from './draft.js';
import type { LibertyGroup, LibertyText } from './syntax.js';
import { wordsOf } from './words.js';

const kinds: Readonly<Record<string, LibertyState['kind']>> = {
  ff: 'register',
  ff_bank: 'register',
  latch: 'latch',
  latch_bank: 'latch',
};

/** Reads a group that describes state; nothing for any other group. */
export function readState(draft: CellDraft, group: LibertyGroup): LibertyState[] {
  const kind = kinds[group.kind];
  if (kind === undefined) return [];
  const isBank = group.kind.endsWith('_bank');
  const words = group.names.flatMap(({ text }) => wordsOf(text));
  const width = isBank ? bankWidth(draft, group, words.pop()) : undefined;
  const functions = new Map<string, LibertyText>();
  for (const [name, [value]] of group.attributes) {
    if (value !== undefined && !name.startsWith('clear_preset_var')) functions.set(name, value);
  }
  const { start, end } = group;
  return [
    {
      ...{ kind, name: words[0] ?? '', inverse: words[1] ?? '', width, functions },
      bothState: bothActive(draft, group, 'clear_preset_var1'),
      bothInverse: bothActive(draft, group, 'clear_preset_var2'),
      ...{ start, end },
    },
  ];
}

function bankWidth(draft: CellDraft, group: LibertyGroup, text: string | undefined): number {
  const width = wholeNumber(text, 1);
  if (width !== undefined && width <= MAX_BITS) return width;
  const message = `${group.kind} needs two names and its number of bits, such as (IQ, IQN, 4)`;
  draft.report('range-invalid', message, group);
  return 1;
}

function bothActive(draft: CellDraft, group: LibertyGroup, name: string): BothActive | undefined {
  const value = group.attributes.get(name)?.[0];
  if (value === undefined) return undefined;
  const text = value.text.trim().toUpperCase();
  if (text.length === 1 && 'LHNTX'.includes(text)) return text as BothActive;
  draft.report('syntax-error', `${name} is one of L, H, N, T and X, got ${value.text}`, value);
  return undefined;
}
