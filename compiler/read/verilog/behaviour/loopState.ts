import type { Binding, SignalBinding } from '../scope.js';
import type { AssignStatement, Expression, Statement } from '../syntax.js';
import { knownOf } from './bits.js';
import { areCallsPure } from './constantCalls.js';
import type { Context } from './context.js';
import { forEachName, plainMeaningOf } from './names.js';
import { assignedNames, contains, walk } from './walk.js';

/** The parts of a loop; a `while` has no step. */
export interface Loop {
  readonly condition: Expression;
  readonly step?: AssignStatement;
  readonly body: Statement;
}

/**
 * The variables that a loop assigns and that its end depends on, directly or through others.
 * Undefined where the text does not tell: with tasks, `disable`, arrays, functions that look beyond
 * their arguments.
 */
export function steeringVariables(loop: Loop, context: Context): SignalBinding[] | undefined {
  const parts = [loop.condition, loop.step, loop.body];
  if (contains(loop.body, 'disable') || !areCallsPure(parts, context)) return undefined;
  const assigned = new Map<number, { variable: SignalBinding; sources: unknown[] }>();
  const conditions = conditionsIn(loop.body);
  let isClear = true;
  const note = ({ target, value }: AssignStatement): void => {
    for (const name of assignedNames(target)) {
      const variable = plainMeaningOf(name, context);
      if (variable?.kind !== 'signal') isClear = false;
      else {
        const known = assigned.get(variable.nets[0]!);
        const sources = [value, target, ...conditions];
        if (known === undefined) assigned.set(variable.nets[0]!, { variable, sources });
        else known.sources.push(...sources);
      }
    }
  };
  if (loop.step !== undefined) note(loop.step);
  walk(loop.body, (node) => {
    const part = node as Statement;
    if (part.kind === 'assign') note(part);
    if (part.kind === 'block' && part.declarations.length > 0) isClear = false;
    return true;
  });
  const steering = new Map<number, SignalBinding>();
  const pending: unknown[] = [loop.condition];
  while (isClear && pending.length > 0) {
    forEachName(pending.pop(), (name) => {
      const binding: Binding | undefined = plainMeaningOf(name, context);
      if (binding?.kind === 'memory' || binding === undefined) isClear = false;
      if (binding?.kind !== 'signal') return;
      const key = binding.nets[0]!;
      const known = assigned.get(key);
      if (known === undefined || steering.has(key)) return;
      steering.set(key, known.variable);
      pending.push(...known.sources);
    });
  }
  return isClear ? [...steering.values()] : undefined;
}

function conditionsIn(body: Statement): unknown[] {
  const conditions: unknown[] = [];
  walk(body, (node) => {
    const part = node as Statement;
    if (part.kind === 'case') conditions.push(part.subject, ...part.items.map((i) => i.labels));
    else if (part.kind === 'if' || part.kind === 'for' || part.kind === 'while') {
      conditions.push(part.condition);
    } else if (part.kind === 'repeat') conditions.push(part.count);
    return true;
  });
  return conditions;
}

/** The values of variables as one text; undefined where one of them is no number. */
export function numbersIn(
  variables: readonly SignalBinding[],
  context: Context,
): string | undefined {
  const values: bigint[] = [];
  for (const { nets } of variables) {
    const value = numberIn(nets, context);
    if (value === undefined) return undefined;
    values.push(value);
  }
  return values.join();
}

/** The number that a variable holds; undefined where it is none. */
export function numberIn(
  nets: SignalBinding['nets'],
  { store, logic }: Context,
): bigint | undefined {
  const value = store.known(nets);
  if (value !== undefined) return value;
  const known = knownOf(
    nets.map((net) => store.read(net)),
    logic,
  );
  return known?.unknown === 0n ? known.value : undefined;
}
