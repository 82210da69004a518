import type { NetId } from '../../../circuit/ids.js';
import type { Constant, Scope } from '../scope.js';
import type { Expression } from '../syntax.js';
import { lowerAssigned, lowerCondition, lowerSelf } from './expressions.js';
import { lowerFloating, mayFloat } from './floating.js';
import type { FloatingBits } from './floatingBits.js';
import { expressionContext, withConstants } from './process.js';
import { realConstant } from './realConstant.js';
import { report } from './report.js';
import { targetPieces } from './targets.js';
import { constantIn, plainNumber } from './widths.js';

export { lowerAlways } from './always.js';
export { isPureFunction } from './constantCalls.js';
export { lowerInitial } from './initial.js';
export { isRealFunction } from './realConstant.js';
export { lowerScalarAssign } from './scalars.js';
export { assignedNames, isBare, walk } from './walk.js';

/**
 * The value of a constant expression (IEEE 1364-2005, clause 5), in its own width and sign.
 *
 * Signals may not be read; constant functions may be called. Real numbers are worked out as such and
 * rounded in the end. Returns undefined after a diagnostic.
 */
export function evaluateConstant(expression: Expression, scope: Scope): Constant | undefined {
  scope.shared.budget.begin(expression);
  return (
    plainNumber(expression) ??
    realConstant(expression, scope, evaluateConstant) ??
    withConstants(scope, (context) => constantIn(expression, context))
  );
}

/**
 * Builds the gates of an expression; returns its nets, least significant bit first.
 *
 * With `targetWidth` the expression is worked out as the right side of an assignment to that many
 * bits (clause 5.5.3) and the result has just that width; without, it has its own. After a
 * diagnostic the result is x.
 */
export function lowerExpression(
  expression: Expression,
  scope: Scope,
  targetWidth?: number,
): NetId[] {
  scope.shared.budget.begin(expression);
  const context = expressionContext(scope);
  return targetWidth === undefined
    ? [...lowerSelf(expression, context)]
    : [...lowerAssigned(expression, context, targetWidth)];
}

/** Builds the gates of an expression as that of a condition; returns a net that is 1 where it holds. */
export function lowerTruth(expression: Expression, scope: Scope): NetId {
  scope.shared.budget.begin(expression);
  return lowerCondition(expression, expressionContext(scope));
}

/**
 * The bits of an expression that may be z, as the right side of an assignment to `targetWidth`
 * bits; undefined for an expression that never is. See `lowerFloating`.
 */
export function lowerIfFloating(
  expression: Expression,
  scope: Scope,
  targetWidth: number,
): FloatingBits | undefined {
  scope.shared.budget.begin(expression);
  const context = expressionContext(scope);
  return mayFloat(expression, context)
    ? lowerFloating(expression, context, targetWidth)
    : undefined;
}

/**
 * The nets that a continuous assignment or an instance's output drives, least significant first.
 *
 * Selects must be constant. For a bit outside of its declaration there is a warning and a net that
 * nothing reads. Returns undefined after an error.
 */
export function lowerTarget(expression: Expression, scope: Scope): NetId[] | undefined {
  scope.shared.budget.begin(expression);
  const context = expressionContext(scope);
  const pieces = targetPieces(expression, 'net', context);
  if (pieces === undefined) return undefined;
  const nets: NetId[] = [];
  for (const { places } of pieces) {
    const place = places[0];
    if (place === undefined || context.logic.valueOf(place.when) !== 1) {
      const message =
        'what drives a net must have constant selects; assign a variable index in an always @*';
      report(scope.shared, 'target-invalid', expression, message);
      return undefined;
    }
    for (const net of place.bits) nets.push(net ?? scope.shared.builder.net());
  }
  return nets;
}
