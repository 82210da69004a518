import { type Known, signedValue } from './bits.js';

/** Operators that are worked out on whole numbers where both operands are constants. */
export type ArithmeticOperator = '+' | '-' | '*' | '/' | '%' | '**';

/**
 * A result of an arithmetic operator on constants, in `width` bits (IEEE 1364-2005, clause 5.1.5).
 *
 * Both operands have `width` bits, but for the exponent of `**`, whose width and sign are its own.
 * x in an operand, and division by zero, make all bits x.
 */
export function constantArithmetic(
  operator: ArithmeticOperator,
  left: Known,
  right: Known,
  width: number,
  signed: boolean,
  exponent: { readonly width: number; readonly signed: boolean },
): Known {
  if (left.unknown !== 0n || right.unknown !== 0n) return allUnknown(width);
  const a = signed ? signedValue(left.value, width) : left.value;
  const ownSign = operator === '**' ? exponent.signed : signed;
  const ownWidth = operator === '**' ? exponent.width : width;
  const b = ownSign ? signedValue(right.value, ownWidth) : right.value;
  const result = compute(operator, a, b, width);
  if (result === undefined) return allUnknown(width);
  return { value: BigInt.asUintN(width, result), unknown: 0n };
}

function allUnknown(width: number): Known {
  return { value: 0n, unknown: (1n << BigInt(width)) - 1n };
}

// BigInt division truncates toward zero and the remainder has the sign of the first operand,
// as clause 5.1.5 asks.
function compute(
  operator: ArithmeticOperator,
  a: bigint,
  b: bigint,
  width: number,
): bigint | undefined {
  switch (operator) {
    case '+':
      return a + b;
    case '-':
      return a - b;
    case '*':
      return a * b;
    case '/':
      return b === 0n ? undefined : a / b;
    case '%':
      return b === 0n ? undefined : a % b;
    case '**':
      return power(a, b, width);
  }
}

/** Table 5-6 of clause 5.1.5; undefined stands for x. */
function power(base: bigint, exponent: bigint, width: number): bigint | undefined {
  if (exponent < 0n) {
    if (base === 0n) return undefined;
    if (base === 1n) return 1n;
    if (base === -1n) return exponent & 1n ? -1n : 1n;
    return 0n;
  }
  let result = 1n;
  let square = base;
  // Squaring modulo 2^width keeps numbers small whatever the exponent is.
  for (let rest = exponent; rest > 0n; rest >>= 1n) {
    if (rest & 1n) result = BigInt.asUintN(width, result * square);
    square = BigInt.asUintN(width, square * square);
  }
  return result;
}
