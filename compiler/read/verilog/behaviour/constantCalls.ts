import type { NameId } from '../../names.js';
import type { Scope } from '../scope.js';
import type { Item, NameExpression, RoutineItem, Statement } from '../syntax.js';
import { knownOf } from './bits.js';
import type { CallExpression, Context } from './context.js';
import { resolveCalled } from './localScope.js';
import { forEachName, isSystemName, plainMeaningOf } from './names.js';
import { errorsMet } from './report.js';
import { walk } from './walk.js';

type Block = Extract<Statement, { kind: 'block' }>;

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
  let arePure = true;
  walk(tree, (node) => {
    if (node.kind === 'callTask') arePure = false;
    if (node.kind === 'call') arePure &&= isPure(node as CallExpression, context);
    return arePure;
  });
  return arePure;
}

function isPure(call: CallExpression, context: Context): boolean {
  if (isSystemName(call.path, context)) return true;
  const binding = resolveCalled(context.scope, call.path);
  if (binding?.kind !== 'routine' || binding.syntax.kind !== 'function') return false;
  return isPureFunction(binding.syntax, binding.scope);
}

/**
 * Whether a function names nothing but parameters and its own variables. Functions that call each
 * other do so unless something else speaks against it.
 */
export function isPureFunction(
  routine: RoutineItem,
  scope: Scope,
  open = new Set<RoutineItem>(),
): boolean {
  if (open.has(routine)) return true;
  open.add(routine);
  let answer = true;
  // What a block declares hides other names in that block alone.
  const look = (tree: unknown, own: ReadonlySet<NameId>): void =>
    walk(tree, (node) => {
      if (node.kind === 'callTask') answer = false;
      else if (node.kind === 'block' && node !== tree) {
        const { declarations } = node as Block;
        if (declarations.length === 0) return answer;
        look(node, new Set([...own, ...declaredNames(declarations)]));
        return false;
      } else if (node.kind === 'name') {
        const { path } = node as NameExpression;
        const isOwn = path.length === 1 && own.has(path[0]!);
        answer &&= isOwn || scope.resolve(path)?.kind === 'parameter';
        return false;
      } else if (node.kind === 'call') {
        const { path } = node as CallExpression;
        const called = isSystemName(path, { scope }) ? undefined : resolveCalled(scope, path);
        if (called?.kind === 'routine') {
          answer &&= isPureFunction(called.syntax, called.scope, open);
        }
      }
      return answer;
    });
  look([routine.body], new Set([routine.name, ...declaredNames(routine.declarations)]));
  return answer;
}

function declaredNames(items: readonly Item[]): NameId[] {
  return items.flatMap((item) => {
    if (item.kind === 'declaration') return Array.from(item.names, ({ name }) => name);
    return item.kind === 'parameter' ? item.values.map(({ name }) => name) : [];
  });
}
