import type { Constant } from '../scope.js';
import type { Expression } from '../syntax.js';

/**
 * A real number, with a sign perhaps, as the whole number it is rounded to where it is assigned to
 * one (clause 4.8.2: half away from zero). Undefined for any other expression.
 */
export function realConstant(expression: Expression): Constant | undefined {
  const value = realValue(expression);
  if (value === undefined) return undefined;
  const rounded = BigInt(Math.sign(value) * Math.round(Math.abs(value)));
  const width = Math.max(32, rounded.toString(2).length + 1);
  return { width, signed: true, value: BigInt.asUintN(width, rounded), unknown: 0n };
}

function realValue(expression: Expression): number | undefined {
  if (expression.kind === 'real') return expression.value;
  if (expression.kind !== 'unary') return undefined;
  const operand = realValue(expression.operand);
  if (operand === undefined || !'+-'.includes(expression.operator)) return undefined;
  return expression.operator === '-' ? -operand : operand;
}
