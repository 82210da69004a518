import type { NetId } from '../../../circuit/ids.js';
import type { Expression, UnaryOperator } from '../syntax.js';
import { invert, negate } from './arithmetic.js';
import { bitsOf, hasUnknown, resize, signedValue, unknownBits } from './bits.js';
import { isTrue } from './compare.js';
import type { Context } from './context.js';
import { operandOf } from './floatingBits.js';
import { foldSelf } from './foldConstant.js';
import type { Bits } from './logic.js';
import { bindingOf, refuse } from './names.js';
import { applyCompare, applyContext, applyShift } from './operators.js';
import { pathText, report } from './report.js';
import { roundedReal } from './roundedReal.js';
import { mayRead, readPart, readSelect } from './selects.js';
import { join, operatorRule, shapeOf, unsizedWidth } from './widths.js';

type BinaryExpression = Extract<Expression, { kind: 'binary' }>;

/**
 * The nets of an expression in the width and sign of its context (IEEE 1364-2005, clause 5.5.2).
 *
 * `width` is at least the expression's own; `signed` is the sign of the whole context, which
 * decides how operands are extended and how `/`, `%` and `>>>` work.
 */
export function lower(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const { budget } = context.scope.shared;
  budget.enter(expression, width);
  let bits: Bits;
  switch (expression.kind) {
    case 'binary':
      bits = lowerBinary(expression, context, width, signed);
      break;
    case 'conditional':
      bits = lowerConditional(expression, context, width, signed);
      break;
    case 'unary':
      bits = lowerUnary(expression, context, width, signed);
      break;
    case 'number':
      bits = lowerNumber(expression, context, width, signed);
      break;
    default:
      bits = resize(lowerOwn(expression, context), width, signed, context.logic);
  }
  budget.leave();
  return bits;
}

/** The nets of an expression in its own width and sign (self-determined, clause 5.4.1). */
export function lowerSelf(expression: Expression, context: Context): Bits {
  const { width, signed } = shapeOf(expression, context);
  return lower(expression, context, width, signed);
}

/** The nets of an expression assigned to something of a width (clause 5.5.3). */
export function lowerAssigned(expression: Expression, context: Context, width: number): Bits {
  const rounded = roundedReal(expression, context);
  if (rounded !== undefined) {
    const value = BigInt.asUintN(width, signedValue(rounded.value, rounded.width));
    return bitsOf({ value, unknown: 0n }, width, context.logic);
  }
  const shape = shapeOf(expression, context);
  const bits = lower(expression, context, Math.max(width, shape.width), shape.signed);
  return bits.slice(0, width);
}

/** The truth value of an expression as a condition. */
export function lowerCondition(expression: Expression, context: Context): NetId {
  const real = roundedReal(expression, context);
  if (real !== undefined) {
    const holds = real.real === undefined ? real.value !== 0n : real.real !== 0;
    return context.logic.constant(holds ? 1 : 0);
  }
  if (context.access !== 'all') {
    const folded = foldSelf(expression, context);
    if (folded !== undefined) return context.logic.constant(folded === 0n ? 0 : 1);
  }
  return isTrue(lowerSelf(expression, context), context.logic);
}

// Operands that have a width of their own whatever the context is.
function lowerOwn(
  expression: Exclude<Expression, { kind: 'binary' | 'conditional' | 'unary' | 'number' }>,
  context: Context,
): Bits {
  switch (expression.kind) {
    case 'name':
      return lowerName(expression, context);
    case 'select':
      return readSelect(expression, context);
    case 'part':
      return readPart(expression, context);
    case 'concat':
      return lowerParts(expression.parts, context);
    case 'replicate': {
      const { width } = shapeOf(expression, context);
      const once = lowerParts(expression.parts, context);
      return Array.from({ length: width }, (_, i) => once[i % once.length]!);
    }
    case 'string':
      return lowerString(expression, context);
    case 'call':
      return context.services.call(expression, context).map((bit) => operandOf(bit, context.logic));
    case 'real':
      refuse(context, expression, 'a real number has no bits; use a whole number');
      return unknownBits(1, context.logic);
  }
}

function lowerString(expression: Extract<Expression, { kind: 'string' }>, context: Context): Bits {
  const { width } = shapeOf(expression, context);
  const bytes = new TextEncoder().encode(expression.text);
  const last = bytes.subarray(Math.max(0, bytes.length - Math.ceil(width / 8)));
  const digits = Array.from(last, (byte) => byte.toString(16).padStart(2, '0')).join('');
  const value = BigInt(`0x0${digits}`);
  return bitsOf({ value, unknown: 0n }, width, context.logic);
}

function lowerName(expression: Extract<Expression, { kind: 'name' }>, context: Context): Bits {
  const { logic, store, scope } = context;
  const binding = bindingOf(expression, context);
  if (binding?.kind === 'parameter') return bitsOf(binding.value, binding.value.width, logic);
  if (binding?.kind === 'signal') {
    if (!mayRead(expression, binding, context)) return unknownBits(binding.nets.length, logic);
    const known = store.known(binding.nets);
    if (known !== undefined)
      return bitsOf({ value: known, unknown: 0n }, binding.nets.length, logic);
    return binding.nets.map((net) => store.read(net));
  }
  if (binding !== undefined) {
    const text = pathText(scope.shared, expression.path);
    const message =
      binding.kind === 'memory'
        ? `\`${text}\` is an array; select a word of it`
        : `\`${text}\` is a ${binding.syntax.kind}; a value is needed here`;
    report(scope.shared, 'range-invalid', expression, message);
  }
  return unknownBits(1, logic);
}

function lowerNumber(
  expression: Extract<Expression, { kind: 'number' }>,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const own = expression.width ?? unsizedWidth(expression);
  // An unsized number with x or z at its left end takes the width of its context (clause 3.5.1).
  const filled = expression.width === undefined ? Math.max(own, width) : own;
  let { unknown } = expression;
  if (expression.extends !== 'zero') {
    const written = BigInt(unknown.toString(2).length);
    unknown |= ((1n << BigInt(filled)) - 1n) & ~((1n << written) - 1n);
  }
  const bits = bitsOf({ value: expression.value & ~unknown, unknown }, filled, context.logic);
  return resize(bits, width, signed, context.logic);
}

function lowerParts(parts: readonly Expression[], context: Context): Bits {
  const lowered = parts.map((part) => {
    if (part.kind === 'number' && part.width === undefined) {
      report(
        context.scope.shared,
        'range-invalid',
        part,
        "a number in a concatenation needs a width, such as 1'b0",
      );
    }
    return lowerSelf(part, context);
  });
  return lowered.reverse().flat();
}

function lowerUnary(
  expression: Extract<Expression, { kind: 'unary' }>,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const { operator, operand } = expression;
  const { logic } = context;
  if (operator === '+') return lower(operand, context, width, signed);
  if (operator === '~') return invert(lower(operand, context, width, signed), logic);
  if (operator === '-') {
    const bits = lower(operand, context, width, signed);
    if (hasUnknown(bits, logic)) return unknownBits(width, logic);
    return logic.strictly(negate(bits, logic), bits);
  }
  return resize([reduce(operator, lowerSelf(operand, context), context)], width, false, logic);
}

function reduce(
  operator: Exclude<UnaryOperator, '+' | '-' | '~'>,
  bits: Bits,
  { logic }: Context,
): NetId {
  switch (operator) {
    case '&':
      return logic.all(bits);
    case '~&':
      return logic.not(logic.all(bits));
    case '|':
      return logic.any(bits);
    case '~|':
    case '!':
      return logic.not(logic.any(bits));
    case '^':
      return logic.parity(bits);
    case '~^':
      return logic.parity(bits, true);
  }
}

function lowerBinary(
  expression: BinaryExpression,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const rule = operatorRule[expression.operator];
  if (rule === 'context') return lowerChain(expression, context, width, signed);
  const { logic } = context;
  if (rule === 'shift') {
    const left = lower(expression.left, context, width, signed);
    const shape = shapeOf(expression.right, context);
    const right = lower(expression.right, context, shape.width, shape.signed);
    return applyShift(expression, left, right, { signed, exponent: shape }, context);
  }
  const bit =
    rule === 'logical' ? lowerLogical(expression, context) : lowerCompare(expression, context);
  return resize([bit], width, false, logic);
}

// `a + b + c …` leans to the left and may be long, so it is walked without recursion.
function lowerChain(
  expression: BinaryExpression,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const chain: BinaryExpression[] = [];
  let node: Expression = expression;
  while (node.kind === 'binary' && operatorRule[node.operator] === 'context') {
    chain.push(node);
    node = node.left;
  }
  let value = lower(node, context, width, signed);
  for (const link of chain.reverse()) {
    const right = lower(link.right, context, width, signed);
    value = applyContext(link, value, right, signed, context);
  }
  return value;
}

function lowerLogical(expression: BinaryExpression, context: Context): NetId {
  const { logic } = context;
  const chain: BinaryExpression[] = [];
  let node: Expression = expression;
  while (node.kind === 'binary' && operatorRule[node.operator] === 'logical') {
    chain.push(node);
    node = node.left;
  }
  let value = lowerCondition(node, context);
  for (const { operator, right } of chain.reverse()) {
    const other = lowerCondition(right, context);
    value = operator === '&&' ? logic.and(value, other) : logic.or(value, other);
  }
  return value;
}

function lowerCompare(expression: BinaryExpression, context: Context): NetId {
  const shape = join(shapeOf(expression.left, context), shapeOf(expression.right, context));
  const left = lower(expression.left, context, shape.width, shape.signed);
  const right = lower(expression.right, context, shape.width, shape.signed);
  return applyCompare(expression, left, right, shape.signed, context);
}

// `a ? b : c ? d : …` leans to the right and may be long.
function lowerConditional(
  expression: Extract<Expression, { kind: 'conditional' }>,
  context: Context,
  width: number,
  signed: boolean,
): Bits {
  const { logic } = context;
  const chain: { condition: NetId; value: Bits }[] = [];
  let node: Expression = expression;
  while (node.kind === 'conditional') {
    const condition = lowerCondition(node.condition, context);
    const chosen = logic.valueOf(condition);
    if (chosen === 1) {
      node = node.whenTrue;
      continue;
    }
    if (chosen !== 0) {
      chain.push({ condition, value: lower(node.whenTrue, context, width, signed) });
    }
    node = node.whenFalse;
  }
  let result = lower(node, context, width, signed);
  for (const { condition, value } of chain.reverse()) {
    result = result.map((net, i) => logic.mux(condition, net, value[i]!));
  }
  return result;
}
