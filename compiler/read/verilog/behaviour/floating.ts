import type { NetId } from '../../../circuit/ids.js';
import type { SignalBinding } from '../scope.js';
import type {
  Expression,
  NameExpression,
  NumberExpression,
  PartExpression,
  RoutineItem,
  SelectExpression,
} from '../syntax.js';
import type { CallExpression, Context } from './context.js';
import { lower, lowerCondition } from './expressions.js';
import { chosenBit, type FloatingBits, resizeFloating } from './floatingBits.js';
import { resolveCalled } from './localScope.js';
import { isSystemName, meaningOf } from './names.js';
import { readFloating } from './selects.js';
import { walk } from './walk.js';
import { shapeOf } from './widths.js';

/**
 * Whether an expression hands on a z that is written in it: as it stands, by a conditional, inside
 * a concatenation, as what a variable was assigned before, or part of it, or by a function as its
 * value. Any other operator makes x of z (IEEE 1364-2005, clause 5.1), and so does a parameter here.
 */
export function mayFloat(expression: Expression, context: Context): boolean {
  // An explicit stack: conditionals are chained by the hundred.
  const pending = [expression];
  for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
    switch (node.kind) {
      case 'number':
        if (node.highZ !== 0n) return true;
        break;
      case 'conditional':
        pending.push(node.whenTrue, node.whenFalse);
        break;
      case 'concat':
      case 'replicate':
        pending.push(...node.parts);
        break;
      case 'name':
      case 'select':
      case 'part':
        if (holdsZ(node, context)) return true;
        break;
      case 'call':
        if (givesZ(node, context)) return true;
        pending.push(...node.arguments);
        break;
    }
  }
  return false;
}

/**
 * Lowers an expression that may be z as the right side of an assignment to `width` bits; the
 * lowest bit comes first.
 *
 * A conditional with z in one branch drives the other one under its condition. Where the condition
 * is x this is the drive of a `bufif1` with an unknown control, not the x of clause 5.1.13.
 */
export function lowerFloating(
  expression: Expression,
  context: Context,
  width: number,
): FloatingBits {
  const shape = shapeOf(expression, context);
  const full = Math.max(width, shape.width);
  return floating(expression, context, full, shape.signed).slice(0, width);
}

// Whether an expression is a variable, or part of one, of which this process has assigned z to bits.
function holdsZ(
  expression: NameExpression | SelectExpression | PartExpression,
  context: Context,
): boolean {
  const { store } = context;
  if (!store.mayFloatAtAll) return false;
  let name: Expression = expression;
  while (name.kind !== 'name') name = name.base;
  const binding = meaningOf(name, context);
  if (binding?.kind === 'memory') {
    return binding.words.some((word) => word.some((net) => store.mayFloat(net)));
  }
  return binding?.kind === 'signal' && binding.nets.some((net) => store.mayFloat(net));
}

const routinesGivingZ = new WeakMap<RoutineItem, boolean>();

// Whether z is written in a function, or in one that it may call.
function givesZ({ path }: CallExpression, context: Context): boolean {
  if (isSystemName(path, context)) return false;
  const binding = resolveCalled(context.scope, path);
  if (binding?.kind !== 'routine') return false;
  let answer = routinesGivingZ.get(binding.syntax);
  if (answer === undefined) {
    answer = false;
    walk(binding.syntax.body, (node) => {
      answer ||= node.kind === 'call' || (node.kind === 'number' && hasZ(node as NumberExpression));
      return answer !== true;
    });
    routinesGivingZ.set(binding.syntax, answer);
  }
  return answer;
}

const hasZ = ({ highZ }: NumberExpression): boolean => highZ !== 0n;

function floating(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  const { budget } = context.scope.shared;
  if (!mayFloat(expression, context)) {
    const enable = context.logic.one;
    return lower(expression, context, width, signed).map((data) => ({ data, enable }));
  }
  budget.enter(expression, width);
  const bits = floatingKind(expression, context, width, signed);
  budget.leave();
  return bits;
}

function floatingKind(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  const { logic } = context;
  switch (expression.kind) {
    case 'conditional':
      return conditional(expression, context, width, signed);
    case 'number':
      return number(expression, context, width, signed);
    case 'concat':
      return resizeFloating(concatenated(expression.parts, context), width, false, logic);
    case 'replicate': {
      const once = concatenated(expression.parts, context);
      const count = shapeOf(expression, context).width / once.length;
      const all = Array.from({ length: count }, () => once).flat();
      return resizeFloating(all, width, false, logic);
    }
    case 'call':
      return resizeFloating(context.services.call(expression, context), width, signed, logic);
    case 'select':
    case 'part':
      return resizeFloating(readFloating(expression, context), width, signed, logic);
    default: {
      const { nets } = meaningOf(expression as NameExpression, context) as SignalBinding;
      const bits = nets.map((net) => context.store.readFloating(net));
      return resizeFloating(bits, width, signed, logic);
    }
  }
}

// `a ? b : c ? d : …` leans to the right and may be long.
function conditional(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  const { logic } = context;
  const chain: { readonly condition: NetId; readonly bits: FloatingBits }[] = [];
  let node = expression;
  while (node.kind === 'conditional') {
    const condition = lowerCondition(node.condition, context);
    const known = logic.valueOf(condition);
    if (known === 1) {
      node = node.whenTrue;
      continue;
    }
    if (known !== 0) {
      chain.push({ condition, bits: floating(node.whenTrue, context, width, signed) });
    }
    node = node.whenFalse;
  }
  let result = floating(node, context, width, signed);
  for (const { condition, bits } of chain.reverse()) {
    result = result.map((bit, i) => chosenBit(condition, bit, bits[i]!, logic));
  }
  return result;
}

function number(
  expression: NumberExpression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  const { logic } = context;
  const own = shapeOf(expression, context).width;
  // As for x, an unsized number with z at its left end takes the width of its context (3.5.1).
  const filled = expression.width === undefined ? Math.max(own, width) : own;
  let { highZ } = expression;
  if (expression.extends === 'z') {
    const written = BigInt(highZ.toString(2).length);
    highZ |= ((1n << BigInt(filled)) - 1n) & ~((1n << written) - 1n);
  }
  const bits = lower(expression, context, filled, signed).map((data, i) => ({
    data,
    enable: logic.constant(((highZ >> BigInt(i)) & 1n) === 1n ? 0 : 1),
  }));
  return resizeFloating(bits, width, signed, logic);
}

function concatenated(parts: readonly Expression[], context: Context): FloatingBits {
  const lowered = parts.map((part) => {
    const { width, signed } = shapeOf(part, context);
    // For the report that a number needs a width here.
    if (part.kind === 'number' && part.width === undefined) {
      lower({ ...part, kind: 'concat', parts: [part] }, context, width, false);
    }
    return floating(part, context, width, signed);
  });
  return lowered.reverse().flat();
}
