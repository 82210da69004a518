import type { Constant, Scope } from '../scope.js';
import type { Expression } from '../syntax.js';
import type { Context } from './context.js';
import { foldSelf } from './foldConstant.js';
import { realConstant } from './realConstant.js';
import { shapeOf } from './widths.js';

/** Real numbers stand near the top of what is assigned; what is deeper is not looked at. */
const MOST_LEVELS = 8;

/**
 * The value of a constant expression with real numbers in it where bits are needed: the whole number
 * that it is rounded to (IEEE 1364-2005, clause 4.8.2: half away from zero). Undefined for any other
 * expression.
 */
export function roundedReal(expression: Expression, context: Context): Constant | undefined {
  if (!mayBeReal(expression, context.scope, 0)) return undefined;
  return realConstant(expression, context.scope, (part) => {
    const value = foldSelf(part, context);
    return value === undefined ? undefined : { ...shapeOf(part, context), value, unknown: 0n };
  });
}

function mayBeReal(expression: Expression, scope: Scope, level: number): boolean {
  if (level > MOST_LEVELS) return false;
  const inner = (part: Expression): boolean => mayBeReal(part, scope, level + 1);
  switch (expression.kind) {
    case 'real':
      return true;
    case 'name': {
      const { path } = expression;
      if (scope.shared.hasReals !== true || path.length > 1) return false;
      return scope.realOf?.(path[0]!) !== undefined;
    }
    case 'unary':
      return inner(expression.operand);
    case 'binary':
      return inner(expression.left) || inner(expression.right);
    case 'conditional':
      return (
        inner(expression.condition) || inner(expression.whenTrue) || inner(expression.whenFalse)
      );
    default:
      return false;
  }
}
