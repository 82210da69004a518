import type { SignalBinding } from '../scope.js';
import type { Expression, Statement } from '../syntax.js';
import { assignBits, blockingAt } from './assign.js';
import { knownOf, resize, unknownBits } from './bits.js';
import type { CallExpression, Context, Exits, RoutineBinding } from './context.js';
import { LATER, Sequence } from './exits.js';
import { lowerAssigned } from './expressions.js';
import { lowerFloating, mayFloat } from './floating.js';
import type { FloatingBits } from './floatingBits.js';
import { LocalScope } from './localScope.js';
import { declareLocals, localVariable, rangeOfType } from './locals.js';
import type { Bits } from './logic.js';
import { calledBinding, isSystemName } from './names.js';
import { pathText, report } from './report.js';
import { lowerSystemFunction } from './systemFunctions.js';
import { shapeOf } from './widths.js';

/** How deep calls may nest: a recursion must end by constants alone. */
const DEPTH_LIMIT = 200;

const STEPS_OF_CALL = 30;

type TaskCall = Extract<Statement, { kind: 'callTask' }>;

/** An argument as declared. */
interface Argument {
  readonly direction: 'input' | 'output' | 'inout';
  readonly variable: SignalBinding;
}

/** The value of a function call: its body is executed at each call (clause 10.4). */
export function callFunction(expression: CallExpression, context: Context): FloatingBits {
  const { logic } = context;
  const known = (bits: Bits): FloatingBits => bits.map((data) => ({ data, enable: logic.one }));
  if (isSystemName(expression.path, context))
    return known(lowerSystemFunction(expression, context));
  const failed = () => known(unknownBits(shapeOf(expression, context).width, logic));
  const routine = routineOf(expression, 'function', context);
  if (routine === undefined) return failed();
  const { syntax } = routine;
  const before = context.store.nextLocal;
  const inside = enterRoutine(routine, context);
  const scope = inside.scope as LocalScope;
  const range = rangeOfType(syntax.resultType, syntax.range, inside);
  const signed = syntax.signed || syntax.resultType === 'integer';
  const result = localVariable(syntax.name, range, signed, inside);
  scope.add(syntax.name, result);
  const given = bindArguments(routine, expression, inside, context);
  if (given === undefined) return failed();
  const { budget } = scope.shared;
  // The stack of a call is that of two operators.
  budget.enter(expression, 0);
  context.services.execute(syntax.body, inside);
  budget.leave();
  const bits = result.nets.map((net) => context.store.readFloating(net));
  context.store.forgetFrom(before);
  return bits;
}

/**
 * Executes a call of a task: its body, then the assignments to outputs (clause 10.2). Returns the
 * condition under which the task waits at power-up, as an exit of the whole `initial`.
 */
export function callTask(statement: TaskCall, context: Context): Exits | undefined {
  const routine = routineOf(statement, 'task', context);
  if (routine === undefined) return undefined;
  const before = context.store.nextLocal;
  const inside = enterRoutine(routine, context);
  const given = bindArguments(routine, statement, inside, context);
  if (given === undefined) return undefined;
  const { budget } = context.scope.shared;
  budget.enter(statement, 0);
  const later = context.services.execute(routine.syntax.body, inside)?.get(LATER);
  budget.leave();
  const sequence = new Sequence(context);
  if (sequence.goesOn(later === undefined ? undefined : new Map([[LATER, later]]))) {
    assignOutputs(given, statement, context);
  }
  const exits = sequence.close();
  context.store.forgetFrom(before);
  return exits;
}

function assignOutputs(given: readonly Argument[], statement: TaskCall, context: Context): void {
  given.forEach(({ direction, variable }, i) => {
    if (direction === 'input') return;
    const bits = variable.nets.map((net) => context.store.readFloating(net));
    const target = statement.arguments[i]!;
    assignBits(target, bits, variable.signed, context, blockingAt(target.start));
  });
}

function routineOf(
  call: CallExpression | TaskCall,
  kind: 'function' | 'task',
  context: Context,
): RoutineBinding | undefined {
  const { shared } = context.scope;
  const text = pathText(shared, call.path);
  const binding = calledBinding(call, context);
  if (binding === undefined) return undefined;
  if (binding.kind !== 'routine' || binding.syntax.kind !== kind) {
    report(shared, 'name-undeclared', call, `\`${text}\` is no ${kind}; declare one of that name`);
    return undefined;
  }
  if (context.depth < DEPTH_LIMIT) return context.store.aborted ? undefined : binding;
  context.store.aborted = true;
  const message =
    `\`${text}\` calls itself more than ${DEPTH_LIMIT} times; ` +
    'the end of a recursion must depend on constants alone';
  report(shared, 'loop-unbounded', call, message);
  return undefined;
}

function enterRoutine({ syntax, scope }: RoutineBinding, context: Context): Context {
  context.scope.shared.budget.spend(STEPS_OF_CALL);
  const local = new LocalScope(scope);
  const inside: Context = {
    ...context,
    scope: local,
    depth: context.depth + 1,
    enclosing: new Set([syntax.name]),
    blocks: new Map(),
  };
  declareLocals(syntax.declarations, local, inside);
  return inside;
}

function bindArguments(
  { syntax }: RoutineBinding,
  call: { readonly arguments: readonly Expression[]; start: number; end: number },
  inside: Context,
  context: Context,
): readonly Argument[] | undefined {
  const declared = declaredArguments(syntax.declarations, inside.scope as LocalScope);
  const count = call.arguments.length;
  if (declared.length !== count) {
    const { shared } = context.scope;
    const message =
      `\`${shared.names.text(syntax.name)}\` takes ${declared.length} ` +
      `argument${declared.length === 1 ? '' : 's'}, got ${count}`;
    report(shared, 'argument-count', call, message);
    return undefined;
  }
  // All arguments are evaluated before any is stored: a call may be an argument of itself.
  const values = declared.map(({ direction, variable }, i) =>
    direction === 'output'
      ? undefined
      : lowerArgument(call.arguments[i]!, context, variable.nets.length),
  );
  values.forEach((value, i) => {
    const { nets } = declared[i]!.variable;
    context.scope.shared.budget.spend(nets.length >>> 2);
    const mode = blockingAt(call.arguments[i]!.start);
    if (value === undefined) return;
    const { bits, driven } = value;
    const isWhole = bits.length === nets.length && driven === undefined;
    const known = isWhole ? knownOf(bits, context.logic) : undefined;
    if (known?.unknown === 0n && context.store.writeKnown(nets, known.value, mode)) return;
    resize(bits, nets.length, false, context.logic).forEach((bit, k) => {
      context.store.write(nets[k]!, bit, context.logic.one, mode, driven?.[k]);
    });
  });
  return declared;
}

/** An argument's bits; `driven`, if given, is 0 for those that are z. */
function lowerArgument(
  expression: Expression,
  context: Context,
  width: number,
): { readonly bits: Bits; readonly driven?: Bits } {
  if (context.access !== 'all' || !mayFloat(expression, context)) {
    return { bits: lowerAssigned(expression, context, width) };
  }
  const floating = lowerFloating(expression, context, width);
  return {
    bits: floating.map(({ data }) => data),
    driven: floating.map(({ enable }) => enable),
  };
}

function declaredArguments(
  items: RoutineBinding['syntax']['declarations'],
  scope: LocalScope,
): Argument[] {
  const result: Argument[] = [];
  for (const item of items) {
    if (item.kind !== 'declaration' || item.direction === undefined) continue;
    for (const { name } of item.names) {
      const variable = scope.own(name);
      if (variable?.kind === 'signal') result.push({ direction: item.direction, variable });
    }
  }
  return result;
}
