import type { NetId } from '../../../circuit/ids.js';
import { X } from '../../../circuit/values.js';
import type { Bits, Logic } from './logic.js';

/** More selecting bits than this make no table. */
const SELECT_LIMIT = 12;

/** Which item of a case statement each value of its subject chooses. */
interface CaseTable {
  /** The bits of the subject that are not constant, each once. */
  readonly select: Bits;
  /** Entry i: the item chosen where `select` has the value i; -1 for the default. */
  readonly arms: readonly number[];
  /** Whether a multiplexer tree takes fewer gates than comparing with each label. */
  readonly isDense: boolean;
  /** Whether every value of the subject has an item. */
  readonly isFull: boolean;
  /** The last item that any value chooses. */
  readonly lastArm: number;
}

/** Works out the table; undefined where labels are not constant or the subject is wide. */
export function caseTable(
  subject: Bits,
  arms: readonly (readonly Bits[])[],
  mode: 'case' | 'casex' | 'casez',
  logic: Logic,
): CaseTable | undefined {
  // An x in the subject matches by rules of its own.
  if (subject.some((net) => logic.valueOf(net) === X)) return undefined;
  const select = [...new Set(subject.filter((net) => logic.valueOf(net) === undefined))];
  if (select.length > SELECT_LIMIT) return undefined;
  const table = new Array<number>(2 ** select.length).fill(-1);
  let filled = 0;
  for (const [arm, labels] of arms.entries()) {
    for (const label of labels) {
      const pattern = patternOf(subject, label, select, mode, logic);
      if (pattern === undefined) return undefined;
      if (pattern === 'never') continue;
      for (let i = 0; i < table.length; i++) {
        if (table[i] !== -1 || (i & pattern.care) !== pattern.value) continue;
        table[i] = arm;
        filled++;
      }
    }
  }
  return {
    select,
    arms: table,
    isDense: table.length <= 16 || filled * 4 >= table.length,
    isFull: filled === table.length,
    lastArm: table.reduce((last, arm) => Math.max(last, arm), -1),
  };
}

/** The values of `select` that a label matches: those whose bits in `care` are `value`. */
interface Pattern {
  care: number;
  value: number;
}

function patternOf(
  subject: Bits,
  label: Bits,
  select: readonly NetId[],
  mode: 'case' | 'casex' | 'casez',
  logic: Logic,
): Pattern | 'never' | undefined {
  const pattern: Pattern = { care: 0, value: 0 };
  let never = false;
  for (const [i, net] of subject.entries()) {
    const asked = logic.valueOf(label[i]!);
    if (asked === undefined) return undefined;
    if (asked === X) {
      never ||= mode === 'case';
      continue;
    }
    const given = logic.valueOf(net);
    if (given !== undefined) {
      never ||= given !== asked;
      continue;
    }
    // A sign extension brings the same net several times, which must be asked for alike.
    const place = 1 << select.indexOf(net);
    if (pattern.care & place) never ||= asked !== (pattern.value & place ? 1 : 0);
    pattern.care |= place;
    if (asked === 1) pattern.value |= place;
  }
  return never ? 'never' : pattern;
}
