import type { NetId } from '../../../circuit/ids.js';
import { lower, lowerCondition } from '../behaviour/expressions.js';
import { expressionContext } from '../behaviour/process.js';
import { shapeOf } from '../behaviour/widths.js';
import type { Expression, NumberExpression } from '../syntax.js';
import type { BlockScope } from './blockScope.js';

type Context = ReturnType<typeof expressionContext>;

/** A bit of a value that may be z: it is `data` while `enable` is 1, and z while that is 0. */
export interface FloatingBit {
  readonly data: NetId;
  readonly enable: NetId;
}

type FloatingBits = readonly FloatingBit[];

/**
 * Whether an expression hands on a z that is written in it: as it stands, by a conditional, or
 * inside a concatenation. Any other operator makes x of z (IEEE 1364-2005, clause 5.1), and so
 * does a parameter here.
 */
export function mayFloat(expression: Expression): boolean {
  // An explicit stack: conditionals are chained by the hundred.
  const pending = [expression];
  for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
    if (node.kind === 'number' && node.highZ !== 0n) return true;
    if (node.kind === 'conditional') pending.push(node.whenTrue, node.whenFalse);
    if (node.kind === 'concat' || node.kind === 'replicate') pending.push(...node.parts);
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
  scope: BlockScope,
  width: number,
): FloatingBits {
  const context = expressionContext(scope);
  const shape = shapeOf(expression, context);
  const full = Math.max(width, shape.width);
  return floating(expression, context, full, shape.signed).slice(0, width);
}

function floating(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  if (mayFloat(expression)) {
    switch (expression.kind) {
      case 'conditional':
        return conditional(expression, context, width, signed);
      case 'number':
        return number(expression, context, width, signed);
      case 'concat':
        return resized(concatenated(expression.parts, context), context, width, false);
      case 'replicate': {
        const once = concatenated(expression.parts, context);
        const count = shapeOf(expression, context).width / once.length;
        const all = Array.from({ length: count }, () => once).flat();
        return resized(all, context, width, false);
      }
    }
  }
  const enable = context.logic.one;
  return lower(expression, context, width, signed).map((data) => ({ data, enable }));
}

// `a ? b : c ? d : …` leans to the right and may be long.
function conditional(
  expression: Expression,
  context: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  const chain: { readonly condition: NetId; readonly bits: FloatingBits }[] = [];
  let node = expression;
  while (node.kind === 'conditional') {
    const condition = lowerCondition(node.condition, context);
    chain.push({ condition, bits: floating(node.whenTrue, context, width, signed) });
    node = node.whenFalse;
  }
  let result = floating(node, context, width, signed);
  for (const { condition, bits } of chain.reverse()) {
    result = result.map((bit, i) => chosen(context, condition, bit, bits[i]!));
  }
  return result;
}

function chosen(
  { logic }: Context,
  condition: NetId,
  whenZero: FloatingBit,
  whenOne: FloatingBit,
): FloatingBit {
  if (logic.valueOf(whenOne.enable) === 0) {
    return { data: whenZero.data, enable: logic.and(logic.not(condition), whenZero.enable) };
  }
  if (logic.valueOf(whenZero.enable) === 0) {
    return { data: whenOne.data, enable: logic.and(condition, whenOne.enable) };
  }
  return {
    data: logic.mux(condition, whenZero.data, whenOne.data),
    enable: logic.mux(condition, whenZero.enable, whenOne.enable),
  };
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
  return resized(bits, context, width, signed);
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

function resized(
  bits: FloatingBits,
  { logic }: Context,
  width: number,
  signed: boolean,
): FloatingBits {
  if (bits.length >= width) return bits.slice(0, width);
  const sign = signed ? bits[bits.length - 1] : undefined;
  const fill = sign ?? { data: logic.zero, enable: logic.one };
  return [...bits, ...new Array<FloatingBit>(width - bits.length).fill(fill)];
}
