import type { NetId } from '../../../circuit/ids.js';
import type { Expression } from '../syntax.js';
import { add, divide, divideByPower, multiply, subtract } from './arithmetic.js';
import { bitsOf, hasUnknown, type Known, knownOf, unknownBits } from './bits.js';
import { equal, less } from './compare.js';
import { type ArithmeticOperator, constantArithmetic } from './constantOperators.js';
import type { Context } from './context.js';
import type { Bits, Logic } from './logic.js';
import { refuse } from './names.js';
import { shift } from './shift.js';
import type { Shape } from './widths.js';

type BinaryExpression = Extract<Expression, { kind: 'binary' }>;

/** The widest division by something that is not constant. */
const DIVISION_LIMIT = 128;

/** `+ - * / % & | ^ ~^` on operands of the context's width. */
export function applyContext(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  signed: boolean,
  context: Context,
): Bits {
  const { logic } = context;
  switch (expression.operator) {
    case '&':
      return left.map((net, i) => logic.and(net, right[i]!));
    case '|':
      return left.map((net, i) => logic.or(net, right[i]!));
    case '^':
      return left.map((net, i) => logic.xor(net, right[i]!));
    case '~^':
      return left.map((net, i) => logic.xnor(net, right[i]!));
  }
  const operator = expression.operator as Exclude<ArithmeticOperator, '**'>;
  const shape = { width: left.length, signed };
  const constant = bothKnown(operator, left, right, shape, shape, logic);
  if (constant !== undefined) return constant;
  if (hasUnknown(left, logic) || hasUnknown(right, logic)) return unknownBits(left.length, logic);
  return logic.strictly(arithmetic(expression, left, right, signed, context), left, right);
}

function arithmetic(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  signed: boolean,
  context: Context,
): Bits {
  const { logic } = context;
  switch (expression.operator) {
    case '+':
      return add(left, right, logic.zero, logic);
    case '-':
      return subtract(left, right, logic);
    case '*':
      return multiply(left, right, logic);
    default: {
      const both = division(expression, left, right, signed, context);
      return expression.operator === '/' ? both.quotient : both.remainder;
    }
  }
}

/** `<< >> <<< >>> **`, whose right operand has a width and sign of its own. */
export function applyShift(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  { signed, exponent }: { signed: boolean; exponent: Shape },
  context: Context,
): Bits {
  const { logic } = context;
  const shifted = (direction: 'left' | 'right', fill: NetId): Bits =>
    logic.strictly(shift(left, right, direction, fill, logic), right);
  switch (expression.operator) {
    case '<<':
    case '<<<':
      return shifted('left', logic.zero);
    case '>>':
      return shifted('right', logic.zero);
    case '>>>':
      return shifted('right', signed ? left[left.length - 1]! : logic.zero);
    default: {
      const result = power(expression, left, right, { signed, exponent }, context);
      return logic.strictly(result, left, right);
    }
  }
}

/** A comparison of operands that were sized by each other. */
export function applyCompare(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  signed: boolean,
  context: Context,
): NetId {
  const { logic } = context;
  switch (expression.operator) {
    case '==':
      return equal(left, right, logic);
    case '!=':
      return logic.not(equal(left, right, logic));
    case '===':
      return identical(expression, left, right, context);
    case '!==':
      return logic.not(identical(expression, left, right, context));
  }
  // An x makes an ordering x as a whole (clause 5.1.7).
  if (hasUnknown(left, logic) || hasUnknown(right, logic)) return logic.unknown;
  return logic.strictly([ordering(expression, left, right, signed, logic)], left, right)[0]!;
}

function ordering(
  { operator }: BinaryExpression,
  left: Bits,
  right: Bits,
  signed: boolean,
  logic: Logic,
): NetId {
  switch (operator) {
    case '<':
      return less(left, right, signed, logic);
    case '>':
      return less(right, left, signed, logic);
    case '<=':
      return logic.not(less(right, left, signed, logic));
    default:
      return logic.not(less(left, right, signed, logic));
  }
}

// Case equality compares x as a value of its own. A circuit cannot; constants can.
function identical(expression: BinaryExpression, left: Bits, right: Bits, context: Context): NetId {
  const { logic } = context;
  const a = knownOf(left, logic);
  const b = knownOf(right, logic);
  if (a !== undefined && b !== undefined) {
    return logic.constant(a.value === b.value && a.unknown === b.unknown ? 1 : 0);
  }
  if (logic.isLooking) return logic.all(left.map((net, i) => logic.same(net, right[i]!)));
  if (hasUnknown(left, logic) || hasUnknown(right, logic)) {
    refuse(
      context,
      expression,
      `\`${expression.operator}\` with x or z asks what no circuit can tell; ` +
        'compare with 0 and 1 only',
    );
  }
  return equal(left, right, logic);
}

function bothKnown(
  operator: ArithmeticOperator,
  left: Bits,
  right: Bits,
  { width, signed }: Shape,
  exponent: Shape,
  logic: Logic,
): Bits | undefined {
  const a = knownOf(left, logic);
  const b = a && knownOf(right, logic);
  if (a === undefined || b === undefined) return undefined;
  const result: Known = constantArithmetic(operator, a, b, width, signed, exponent);
  return bitsOf(result, width, logic);
}

function division(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  signed: boolean,
  context: Context,
): { quotient: Bits; remainder: Bits } {
  const { logic } = context;
  const width = left.length;
  const divisor = knownOf(right, logic);
  const exponent = divisor === undefined ? -1 : exponentOf(divisor.value);
  // The highest bit of a signed divisor is its sign, no power of two.
  if (exponent >= 0 && !(signed && exponent === width - 1)) {
    return divideByPower(left, exponent, signed, logic);
  }
  if (width > DIVISION_LIMIT) {
    refuse(
      context,
      expression,
      `a division of ${width} bits is too large to build; use at most ${DIVISION_LIMIT} bits, ` +
        'or divide by a power of two',
    );
    return { quotient: unknownBits(width, logic), remainder: unknownBits(width, logic) };
  }
  return divide(left, right, signed, logic);
}

/** e where value is 2^e, else -1. */
function exponentOf(value: bigint): number {
  return value > 0n && (value & (value - 1n)) === 0n ? value.toString(2).length - 1 : -1;
}

function power(
  expression: BinaryExpression,
  left: Bits,
  right: Bits,
  { signed, exponent }: { signed: boolean; exponent: Shape },
  context: Context,
): Bits {
  const { logic } = context;
  const shape = { width: left.length, signed };
  const constant = bothKnown('**', left, right, shape, exponent, logic);
  if (constant !== undefined) return constant;
  const base = knownOf(left, logic);
  if (
    base !== undefined &&
    base.unknown === 0n &&
    base.value === 2n &&
    !(signed && left.length < 3)
  ) {
    const one = bitsOf({ value: 1n, unknown: 0n }, left.length, logic);
    const shifted = shift(one, right, 'left', logic.zero, logic);
    // 2 to a negative power is less than 1, so 0.
    const negative = exponent.signed ? right[right.length - 1]! : logic.zero;
    return shifted.map((net) => logic.and(net, logic.not(negative)));
  }
  const times = knownOf(right, logic);
  if (times !== undefined && times.unknown === 0n && isSmall(times.value, exponent)) {
    let result = bitsOf({ value: 1n, unknown: 0n }, left.length, logic);
    for (let i = 0n; i < times.value; i++) result = multiply(result, left, logic);
    return result;
  }
  refuse(
    context,
    expression,
    '`**` of signals needs the base 2 or a constant exponent of at most 8; ' +
      'write a multiplication or a table instead',
  );
  return unknownBits(left.length, logic);
}

function isSmall(value: bigint, { width, signed }: Shape): boolean {
  return value <= 8n && !(signed && value >> BigInt(width - 1) === 1n);
}
