import type { Expression } from '../syntax.js';
import { bitsOf, unknownBits } from './bits.js';
import type { CallExpression, Context } from './context.js';
import { lowerSelf } from './expressions.js';
import type { Bits } from './logic.js';
import { refuse } from './names.js';
import { report } from './report.js';
import { constantIn } from './widths.js';

/** The value of `$signed`, `$unsigned` (clause 5.5) or `$clog2` (clause 17.11.1). */
export function lowerSystemFunction(expression: CallExpression, context: Context): Bits {
  const { shared } = context.scope;
  const name = shared.names.text(expression.path[0]!);
  const operand = expression.arguments[0];
  if (name !== '$signed' && name !== '$unsigned' && name !== '$clog2') {
    const message = `\`${name}\` has no meaning in a circuit; leave it out or use a constant`;
    refuse(context, expression, message);
    return unknownBits(1, context.logic);
  }
  if (operand === undefined || expression.arguments.length > 1) {
    const count = expression.arguments.length;
    report(shared, 'argument-count', expression, `\`${name}\` takes 1 argument, got ${count}`);
    return unknownBits(name === '$clog2' ? 32 : 1, context.logic);
  }
  return name === '$clog2' ? log2(operand, context) : lowerSelf(operand, context);
}

// The argument counts as unsigned; the logarithm of 0 is 0.
function log2(operand: Expression, context: Context): Bits {
  const constant = constantIn(operand, context);
  if (constant === undefined || constant.unknown !== 0n) return unknownBits(32, context.logic);
  const { value } = constant;
  const result = value <= 1n ? 0 : (value - 1n).toString(2).length;
  return bitsOf({ value: BigInt(result), unknown: 0n }, 32, context.logic);
}
