import type { Expression, PartExpression, SelectExpression } from '../syntax.js';
import { knownOf, signedValue } from './bits.js';
import type { Context } from './context.js';
import type { Bits } from './logic.js';
import { report } from './report.js';
import { shapeOf } from './widths.js';

/** The value of an index, constant or not. */
export type IndexValue =
  | { readonly kind: 'constant'; readonly value: number }
  | { readonly kind: 'unknown' }
  | { readonly kind: 'variable'; readonly bits: Bits; readonly signed: boolean };

/** Works out an index; a constant too large to be in any range counts as just that. */
export function indexValue(expression: Expression, context: Context): IndexValue {
  const { width, signed } = shapeOf(expression, context);
  const folded = context.services.fold(expression, context, width, signed);
  if (folded !== undefined) {
    return { kind: 'constant', value: Number(signed ? signedValue(folded, width) : folded) };
  }
  const bits = context.services.lower(expression, context, width, signed);
  const known = knownOf(bits, context.logic);
  if (known === undefined) return { kind: 'variable', bits, signed };
  if (known.unknown !== 0n) return { kind: 'unknown' };
  return {
    kind: 'constant',
    value: Number(signed ? signedValue(known.value, width) : known.value),
  };
}

/** Says that a select with constant numbers is outside of what was declared. */
export function warnOutside(
  place: SelectExpression | PartExpression,
  left: number,
  right: number,
  context: Context,
): void {
  report(
    context.scope.shared,
    'select-outside',
    place,
    `this select is not all within [${left}:${right}]; what lies outside reads as x and is not ` +
      'written',
  );
}
