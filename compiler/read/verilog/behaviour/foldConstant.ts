import type { Expression } from '../syntax.js';
import { signedValue } from './bits.js';
import { constantCall } from './constantCalls.js';
import { constantArithmetic } from './constantOperators.js';
import type { Context } from './context.js';
import { join, operatorRule, type Shape, shapeOf, unsizedWidth } from './widths.js';

type Binary = Extract<Expression, { kind: 'binary' }>;
type Unary = Extract<Expression, { kind: 'unary' }>;

// What nests deeper is rare, and worked out in the ordinary way.
const MOST_LEVELS = 40;

/**
 * The value of an expression of plain numbers, parameters, functions of these and variables that
 * were assigned a number, in the width and sign of its context, as `lower` gives it in bits;
 * undefined for any other, and where an x comes in.
 *
 * Loops ask for such values by the hundred thousand.
 */
export function foldConstant(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
  level = 0,
): bigint | undefined {
  if (level > MOST_LEVELS) return undefined;
  switch (expression.kind) {
    case 'number': {
      if (expression.unknown !== 0n) return undefined;
      const own = expression.width ?? unsizedWidth(expression);
      return resized(expression.value, own, width, signed);
    }
    case 'name': {
      if (expression.indices !== undefined) return undefined;
      const binding = context.scope.resolve(expression.path);
      if (binding?.kind === 'signal') {
        const value = context.store.known(binding.nets);
        return value === undefined ? undefined : resized(value, binding.nets.length, width, signed);
      }
      if (binding?.kind !== 'parameter' || binding.value.unknown !== 0n) return undefined;
      return resized(binding.value.value, binding.value.width, width, signed);
    }
    case 'unary':
      return foldUnary(expression, context, width, signed, level + 1);
    case 'binary':
      return foldBinary(expression, context, width, signed, level + 1);
    case 'conditional': {
      const condition = foldSelf(expression.condition, context, level + 1);
      if (condition === undefined) return undefined;
      const chosen = condition === 0n ? expression.whenFalse : expression.whenTrue;
      return foldConstant(chosen, context, width, signed, level + 1);
    }
    case 'call': {
      const value = constantCall(expression, context);
      if (value === undefined) return undefined;
      return resized(value, shapeOf(expression, context).width, width, signed);
    }
    default:
      return undefined;
  }
}

/** Bits of a value, cut or extended to another width. */
function resized(value: bigint, own: number, width: number, signed: boolean): bigint {
  if (own === width || (own < width && !signed)) return value;
  return BigInt.asUintN(width, signed ? signedValue(value, own) : value);
}

/** The value of an expression in its own width and sign; undefined as for `foldConstant`. */
export function foldSelf(expression: Expression, context: Context, level = 0): bigint | undefined {
  if (!isFoldable(expression)) return undefined;
  const { width, signed } = shapeOf(expression, context);
  return foldConstant(expression, context, width, signed, level);
}

// Spares the work for most of what cannot be folded.
const isFoldable = ({ kind }: Expression): boolean =>
  kind === 'number' ||
  kind === 'name' ||
  kind === 'unary' ||
  kind === 'binary' ||
  kind === 'conditional' ||
  kind === 'call';

function foldUnary(
  { operator, operand }: Unary,
  context: Context,
  width: number,
  signed: boolean,
  level: number,
): bigint | undefined {
  if (operator === '+' || operator === '-' || operator === '~') {
    const value = foldConstant(operand, context, width, signed, level);
    if (value === undefined || operator === '+') return value;
    return BigInt.asUintN(width, operator === '-' ? -value : ~value);
  }
  if (operator !== '!') return undefined;
  const value = foldSelf(operand, context, level);
  return value === undefined ? undefined : bit(value === 0n);
}

const bit = (isSet: boolean): bigint => (isSet ? 1n : 0n);

function foldBinary(
  expression: Binary,
  context: Context,
  width: number,
  signed: boolean,
  level: number,
): bigint | undefined {
  const { operator, left, right } = expression;
  if (!isFoldable(left) || !isFoldable(right)) return undefined;
  const rule = operatorRule[operator];
  if (rule === 'compare') return foldCompare(expression, context, level);
  if (rule === 'logical') return foldLogical(expression, context, level);
  const a = foldConstant(left, context, width, signed, level);
  if (a === undefined) return undefined;
  if (rule === 'context') {
    const b = foldConstant(right, context, width, signed, level);
    return b === undefined ? undefined : combine(operator, a, b, { width, signed });
  }
  const b = foldSelf(right, context, level);
  if (b === undefined || operator === '**') return undefined;
  return shifted(operator, a, b, { width, signed });
}

function combine(
  operator: Binary['operator'],
  a: bigint,
  b: bigint,
  { width, signed }: Shape,
): bigint | undefined {
  switch (operator) {
    case '&':
      return a & b;
    case '|':
      return a | b;
    case '^':
      return a ^ b;
    case '~^':
      return BigInt.asUintN(width, ~(a ^ b));
    case '+':
    case '-':
    case '*':
    case '/':
    case '%': {
      const shape = { width, signed };
      const [left, right] = [
        { value: a, unknown: 0n },
        { value: b, unknown: 0n },
      ] as const;
      const result = constantArithmetic(operator, left, right, width, signed, shape);
      return result.unknown === 0n ? result.value : undefined;
    }
    default:
      return undefined;
  }
}

function shifted(
  operator: Binary['operator'],
  value: bigint,
  amount: bigint,
  { width, signed }: Shape,
): bigint {
  const isLeft = operator === '<<' || operator === '<<<';
  const isArithmetic = operator === '>>>' && signed;
  const own = isArithmetic ? signedValue(value, width) : value;
  if (amount >= BigInt(width)) return isArithmetic && own < 0n ? BigInt.asUintN(width, -1n) : 0n;
  return BigInt.asUintN(width, isLeft ? own << amount : own >> amount);
}

function foldCompare(
  { operator, left, right }: Binary,
  context: Context,
  level: number,
): bigint | undefined {
  const { width, signed } = join(shapeOf(left, context), shapeOf(right, context));
  const a = foldConstant(left, context, width, signed, level);
  const b = a === undefined ? undefined : foldConstant(right, context, width, signed, level);
  if (a === undefined || b === undefined) return undefined;
  if (operator === '==' || operator === '===') return bit(a === b);
  if (operator === '!=' || operator === '!==') return bit(a !== b);
  const [x, y] = signed ? [signedValue(a, width), signedValue(b, width)] : [a, b];
  if (operator === '<') return bit(x < y);
  if (operator === '>') return bit(x > y);
  return bit(operator === '<=' ? x <= y : x >= y);
}

function foldLogical(
  { operator, left, right }: Binary,
  context: Context,
  level: number,
): bigint | undefined {
  const a = foldSelf(left, context, level);
  const b = a === undefined ? undefined : foldSelf(right, context, level);
  if (a === undefined || b === undefined) return undefined;
  return bit(operator === '&&' ? a !== 0n && b !== 0n : a !== 0n || b !== 0n);
}
