import type { LibertyCell, LibertyStateTable } from './cell.js';
import { readClockGate } from './clockGate.js';
import { CellDraft } from './draft.js';
import { readBundle, readBus, readPins, readSupply } from './readPins.js';
import { readState } from './readState.js';
import type { LibertyGroup } from './syntax.js';
import { wordsOf } from './words.js';

/** Takes the logic of a cell out of its group. */
export function readCell(group: LibertyGroup, library: LibertyGroup): LibertyCell {
  const draft = new CellDraft(group, library);
  for (const inner of group.groups) pinReaders[inner.kind]?.(draft, inner);
  const states = [
    ...group.groups.flatMap((inner) => readState(draft, inner)),
    ...readClockGate(draft, group),
  ];
  const tables = group.groups.filter(({ kind }) => kind === 'statetable');
  const [name] = group.names;
  return {
    name: name?.text ?? '',
    start: name?.start ?? group.start,
    end: name?.end ?? group.end,
    pins: draft.pins,
    ports: draft.ports,
    vectors: draft.vectors,
    states,
    stateTable: tables[0] && stateTableOf(tables[0]),
    clockGate: group.attributes.get('clock_gating_integrated_cell')?.[0],
    hasTestCell: group.groups.some(({ kind }) => kind === 'test_cell'),
    aliases: draft.aliases,
    problems: draft.problems,
  };
}

const pinReaders: Readonly<Record<string, typeof readPins>> = {
  bundle: readBundle,
  bus: readBus,
  pg_pin: readSupply,
  pin: readPins,
};

function stateTableOf({ names, attributes, start, end }: LibertyGroup): LibertyStateTable {
  const list = (text: string | undefined): string[] => wordsOf(text ?? '');
  return {
    inputs: list(names[0]?.text),
    nodes: list(names[1]?.text),
    table: attributes.get('table')?.[0],
    start,
    end,
  };
}
