import type { NetId } from '../../../circuit/ids.js';
import { X } from '../../../circuit/values.js';
import type { Expression, Statement } from '../syntax.js';
import { hasUnknown, knownOf } from './bits.js';
import { caseTable } from './caseTable.js';
import { Alternatives } from './conditions.js';
import type { Context, Exits } from './context.js';
import { mergeExits } from './exits.js';
import { lower } from './expressions.js';
import type { Bits } from './logic.js';
import { refuse } from './names.js';
import type { Branch } from './store.js';
import { selectFrom } from './tables.js';
import { join, shapeOf } from './widths.js';

type CaseStatement = Extract<Statement, { kind: 'case' }>;

/** An item of a case statement with its labels worked out. */
interface Arm {
  readonly labels: readonly Bits[];
  readonly body: Statement;
}

/**
 * Executes a case statement (clause 9.5): the first item that matches, else the default.
 *
 * `full_case` and `parallel_case` change nothing; items are tried in order. In `casez` and
 * `casex`, x and z bits of a label match anything.
 */
export function executeCase(statement: CaseStatement, context: Context): Exits | undefined {
  const labels = statement.items.flatMap((item) => item.labels);
  let shape = shapeOf(statement.subject, context);
  for (const label of labels) shape = join(shape, shapeOf(label, context));
  const { width, signed } = shape;
  const subject = lower(statement.subject, context, width, signed);
  const arms: Arm[] = [];
  let otherwise: Statement | undefined;
  for (const item of statement.items) {
    if (item.labels.length === 0) otherwise ??= item.body;
    else {
      const bits = item.labels.map((label) => {
        const value = lower(label, context, width, signed);
        checkLabel(label, value, subject, statement.mode, context);
        return value;
      });
      arms.push({ labels: bits, body: item.body });
    }
  }
  const table = caseTable(
    subject,
    arms.map((arm) => arm.labels),
    statement.mode,
    context.logic,
  );
  if (table?.isDense) return executeTable(table, arms, otherwise, context);
  if (table?.isFull && otherwise === undefined) {
    const last = table.lastArm;
    return executeChain(statement, subject, arms.slice(0, last), arms[last]!.body, context);
  }
  return executeChain(statement, subject, arms, otherwise, context);
}

// A circuit has no x to compare with, and casez takes only z for a wildcard.
function checkLabel(
  label: Expression,
  value: Bits,
  subject: Bits,
  mode: CaseStatement['mode'],
  context: Context,
): void {
  if (mode === 'casex' || knownOf(subject, context.logic) !== undefined) return;
  const isX =
    mode === 'case'
      ? hasUnknown(value, context.logic)
      : label.kind === 'number' && (label.unknown & ~label.highZ) !== 0n;
  if (!isX) return;
  const way = mode === 'case' ? 'use casez with ? for bits that do not matter' : 'use ? instead';
  refuse(context, label, `a label with x bits can never match in a circuit; ${way}`);
}

function executeTable(
  table: { readonly select: Bits; readonly arms: readonly number[] },
  arms: readonly Arm[],
  otherwise: Statement | undefined,
  context: Context,
): Exits | undefined {
  const { store, services, logic } = context;
  const branches = new Map<number, Branch>();
  const exits = new Map<number, Exits>();
  for (const arm of new Set(table.arms)) {
    const body = arms[arm]?.body ?? otherwise;
    if (body === undefined) continue;
    // A subject that is constant leaves one arm, which needs no branch.
    if (table.select.length === 0) return services.execute(body, context);
    store.enter();
    const left = services.execute(body, context);
    branches.set(arm, store.leave());
    if (left !== undefined) exits.set(arm, left);
  }
  store.apply(
    store.mergeTable(
      table.select,
      table.arms.map((arm) => branches.get(arm)),
    ),
  );
  let all: Exits | undefined;
  for (const [arm, left] of exits) {
    const leaf = (i: number): NetId => logic.constant(table.arms[i] === arm ? 1 : 0);
    all = mergeExits(selectFrom(table.select, leaf, logic)!, left, all, logic);
  }
  return all;
}

function executeChain(
  { mode }: CaseStatement,
  subject: Bits,
  arms: readonly Arm[],
  otherwise: Statement | undefined,
  context: Context,
): Exits | undefined {
  const { logic } = context;
  const alternatives = new Alternatives(context);
  for (const { labels, body } of arms) {
    const condition = logic.any(labels.map((label) => matches(subject, label, mode, context)));
    if (!alternatives.add(condition, body)) break;
  }
  return alternatives.finish(otherwise);
}

function matches(
  subject: Bits,
  label: Bits,
  mode: CaseStatement['mode'],
  { logic }: Context,
): NetId {
  return logic.all(
    subject.map((net, i) => {
      const asked = logic.valueOf(label[i]!);
      const given = logic.valueOf(net);
      if (mode !== 'case' && asked === X) return logic.one;
      if (mode === 'casex' && given === X) return logic.one;
      if (asked !== undefined && given !== undefined)
        return logic.constant(asked === given ? 1 : 0);
      return logic.xnor(net, label[i]!);
    }),
  );
}
