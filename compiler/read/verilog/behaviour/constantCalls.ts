import type { NameId } from '../../names.js';
import type { Scope } from '../scope.js';
import type { AssignStatement, Item, NameExpression, RoutineItem, Statement } from '../syntax.js';
import { knownOf } from './bits.js';
import type { CallExpression, Context } from './context.js';
import { resolveCalled } from './localScope.js';
import { forEachName, isSystemName, plainMeaningOf } from './names.js';
import { errorsMet } from './report.js';
import { showsOnly } from './showsOnly.js';
import { assignedNames, walk } from './walk.js';

type Block = Extract<Statement, { kind: 'block' }>;
type TaskCall = Extract<Statement, { kind: 'callTask' }>;

const known = new WeakMap<CallExpression, WeakMap<Scope, bigint | null>>();

/**
 * The value of a call of which nothing but parameters and numbers decide, in its own width; worked
 * out once for each scope. Undefined for any other call, and where an x comes in.
 */
export function constantCall(call: CallExpression, context: Context): bigint | undefined {
  const { scope, logic, services } = context;
  const values = known.get(call) ?? new WeakMap<Scope, bigint | null>();
  known.set(call, values);
  let value = values.get(scope);
  if (value === undefined) {
    value = null;
    const before = errorsMet(scope.shared);
    if (hasConstantArguments(call, context) && areCallsPure(call, context)) {
      const bits = services.call(call, context).map(({ data }) => data);
      const result = knownOf(bits, logic);
      const isSure = errorsMet(scope.shared) === before && !context.store.aborted;
      if (result?.unknown === 0n && isSure) value = result.value;
    }
    values.set(scope, value);
  }
  return value ?? undefined;
}

function hasConstantArguments(call: CallExpression, context: Context): boolean {
  let isConstant = true;
  forEachName(call.arguments, (name) => {
    isConstant &&= plainMeaningOf(name, context)?.kind === 'parameter';
  });
  return isConstant;
}

/** Whether all calls in a part of the syntax tree are of functions whose arguments say it all. */
export function areCallsPure(tree: unknown, context: Context): boolean {
  return areCallsConfined(tree, context, 'names');
}

/** Whether a call in a part of the syntax tree may assign what is not the function's own. */
export function mayAssign(tree: unknown, context: Context): boolean {
  return !areCallsConfined(tree, context, 'targets');
}

/** Whether a function names nothing but parameters and its own variables. */
export function isPureFunction(routine: RoutineItem, scope: Scope): boolean {
  return isConfined(routine, scope, 'names', new Set());
}

/** What of a function is to be its own: all that it names, or what it assigns. */
type Confined = 'names' | 'targets';

function areCallsConfined(tree: unknown, context: Context, what: Confined): boolean {
  let areConfined = true;
  walk(tree, (node) => {
    if (node.kind === 'callTask') areConfined = false;
    if (node.kind !== 'call') return areConfined;
    const { path } = node as CallExpression;
    if (isSystemName(path, context)) return true;
    const called = resolveCalled(context.scope, path);
    areConfined &&=
      called?.kind === 'routine' &&
      called.syntax.kind === 'function' &&
      isConfined(called.syntax, called.scope, what, new Set());
    return areConfined;
  });
  return areConfined;
}

/** Functions that call each other, `open` ones among them, are confined unless one of them is not. */
function isConfined(
  routine: RoutineItem,
  scope: Scope,
  what: Confined,
  open: Set<RoutineItem>,
): boolean {
  if (open.has(routine)) return true;
  open.add(routine);
  let answer = true;
  const look = (tree: unknown, own: ReadonlySet<NameId>): void => {
    const check = ({ path }: NameExpression): void => {
      const isOwn = path.length === 1 && own.has(path[0]!);
      answer &&= isOwn || scope.resolve(path)?.kind === 'parameter';
    };
    walk(tree, (node) => {
      if (node.kind === 'callTask') {
        answer &&= what === 'targets' && showsOnly((node as TaskCall).path, { scope });
      } else if (node.kind === 'block' && node !== tree) {
        // What a block declares hides other names in that block alone.
        const { declarations } = node as Block;
        if (declarations.length === 0) return answer;
        look(node, new Set([...own, ...declaredNames(declarations)]));
        return false;
      } else if (node.kind === 'name') {
        if (what === 'names') check(node as NameExpression);
        return false;
      } else if (node.kind === 'assign') {
        if (what === 'targets') assignedNames((node as AssignStatement).target).forEach(check);
      } else if (node.kind === 'call') {
        const { path } = node as CallExpression;
        const called = isSystemName(path, { scope }) ? undefined : resolveCalled(scope, path);
        if (called?.kind === 'routine') {
          answer &&= isConfined(called.syntax, called.scope, what, open);
        }
      }
      return answer;
    });
  };
  look([routine.body], new Set([routine.name, ...declaredNames(routine.declarations)]));
  return answer;
}

function declaredNames(items: readonly Item[]): NameId[] {
  return items.flatMap((item) => {
    if (item.kind === 'declaration') return Array.from(item.names, ({ name }) => name);
    return item.kind === 'parameter' ? item.values.map(({ name }) => name) : [];
  });
}
