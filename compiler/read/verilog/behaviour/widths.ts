import type { Constant } from '../scope.js';
import type {
  BinaryOperator,
  Expression,
  PartExpression,
  RoutineItem,
  UnaryOperator,
} from '../syntax.js';
import { type Known, knownOf, signedValue } from './bits.js';
import type { Context } from './context.js';
import { resolveCalled } from './localScope.js';
import { bindingOf, meaningOf } from './names.js';
import { errorsMet, type Placed, report } from './report.js';

/** Width in bits and sign of an expression. */
export interface Shape {
  readonly width: number;
  readonly signed: boolean;
}

/** The widest value: as wide as any implementation must allow (clause 3.5.1). */
export const MAX_WIDTH = 65536;

const STEPS_OF_CONSTANT = 4;

/** The greatest number that has room in 32 bits whatever its sign. */
const MOST_SHORT = 0x7fff_ffffn;

/** The widest concatenation, which is as wide as vectors are declared at most. */
const MAX_VECTOR = 1 << 20;

/**
 * What an operator makes of the width and sign of its operands (IEEE 1364-2005, table 5-22):
 * `context` takes both from both operands, `shift` from the left one, `compare` and `logical`
 * give one unsigned bit. Operands of `compare` are sized by each other, those of `logical` are
 * self-determined.
 */
export const operatorRule: Readonly<
  Record<BinaryOperator, 'context' | 'shift' | 'compare' | 'logical'>
> = {
  '+': 'context',
  '-': 'context',
  '*': 'context',
  '/': 'context',
  '%': 'context',
  '&': 'context',
  '|': 'context',
  '^': 'context',
  '~^': 'context',
  '**': 'shift',
  '<<': 'shift',
  '>>': 'shift',
  '<<<': 'shift',
  '>>>': 'shift',
  '==': 'compare',
  '!=': 'compare',
  '===': 'compare',
  '!==': 'compare',
  '<': 'compare',
  '<=': 'compare',
  '>': 'compare',
  '>=': 'compare',
  '&&': 'logical',
  '||': 'logical',
};

const oneBit: Shape = { width: 1, signed: false };

/** The larger width; signed if both are (clause 5.5.1). */
export function join(a: Shape, b: Shape): Shape {
  return { width: Math.max(a.width, b.width), signed: a.signed && b.signed };
}

/** The self-determined width and sign of an expression (clauses 5.4.1 and 5.5.1). */
export function shapeOf(expression: Expression, context: Context): Shape {
  // Long chains lean to the left (operators) or to the right (conditionals): no recursion there.
  let joined: Shape | undefined;
  let node = expression;
  for (;;) {
    let part: Expression | undefined;
    if (node.kind === 'binary' && operatorRule[node.operator] === 'context') part = node.right;
    else if (node.kind === 'conditional') part = node.whenTrue;
    if (part === undefined) {
      // These have the width and sign of an operand.
      if (node.kind === 'binary' && operatorRule[node.operator] === 'shift') node = node.left;
      else if (node.kind === 'unary' && takesContext(node.operator)) node = node.operand;
      else break;
      continue;
    }
    const shape = shapeOf(part, context);
    joined = joined === undefined ? shape : join(joined, shape);
    node = node.kind === 'binary' ? node.left : node.kind === 'conditional' ? node.whenFalse : node;
  }
  const rest = shapeOfOther(node, context);
  return joined === undefined ? rest : join(joined, rest);
}

const takesContext = (operator: UnaryOperator): boolean =>
  operator === '+' || operator === '-' || operator === '~';

/** Eight bits for each byte (clause 3.6). */
function stringWidth(node: Extract<Expression, { kind: 'string' }>, context: Context): number {
  const bytes = Math.max(1, new TextEncoder().encode(node.text).length);
  return withinLimit(bytes * 8, node, context);
}

function shapeOfOther(node: Expression, context: Context): Shape {
  switch (node.kind) {
    case 'number':
      return { width: node.width ?? unsizedWidth(node), signed: node.signed };
    case 'string':
      return { width: stringWidth(node, context), signed: false };
    case 'name':
    case 'select':
      return shapeOfName(node, context);
    case 'part':
      return { width: partWidth(node, context), signed: false };
    case 'concat':
      return {
        width: withinLimit(concatWidth(node.parts, context), node, context, MAX_VECTOR),
        signed: false,
      };
    case 'replicate':
      return { width: replicateWidth(node, context), signed: false };
    case 'call':
      return shapeOfCall(node, context);
    default:
      return oneBit;
  }
}

/** 32 bits, or as many as a larger number needs to keep its value (clause 3.5.1). */
export function unsizedWidth(node: Extract<Expression, { kind: 'number' }>): number {
  if (node.value <= MOST_SHORT && node.unknown === 0n) return 32;
  const bits = (node.value | node.unknown).toString(2).length;
  return Math.max(32, node.signed ? bits + 1 : bits);
}

function shapeOfName(
  node: Extract<Expression, { kind: 'name' | 'select' }>,
  context: Context,
): Shape {
  let depth = 0;
  let name = node;
  for (; name.kind === 'select'; name = name.base) depth++;
  const binding = meaningOf(name, context);
  if (binding?.kind === 'memory' && depth === binding.indices.length) {
    return { width: Math.abs(binding.msb - binding.lsb) + 1, signed: binding.signed };
  }
  if (depth > 0) return oneBit;
  if (binding?.kind === 'signal') return { width: binding.nets.length, signed: binding.signed };
  if (binding?.kind === 'parameter') return binding.value;
  return oneBit;
}

/** Width of a part select: its numbers must be constants. */
export function partWidth(node: PartExpression, context: Context): number {
  if (node.mode !== 'range') {
    return withinLimit(countOf(node.right, context, 1) ?? 1, node.right, context);
  }
  const left = integerOf(node.left, context);
  const right = integerOf(node.right, context);
  if (left === undefined || right === undefined) return 1;
  return withinLimit(Math.abs(left - right) + 1, node, context);
}

function concatWidth(parts: readonly Expression[], context: Context): number {
  let width = 0;
  for (const part of parts) width += shapeOf(part, context).width;
  return width;
}

function replicateWidth(
  node: Extract<Expression, { kind: 'replicate' }>,
  context: Context,
): number {
  const count = countOf(node.count, context, 0) ?? 1;
  return withinLimit(count * concatWidth(node.parts, context), node, context);
}

function shapeOfCall(node: Extract<Expression, { kind: 'call' }>, context: Context): Shape {
  const { shared } = context.scope;
  switch (node.path.length === 1 ? shared.names.text(node.path[0]!) : '') {
    case '$signed':
    case '$unsigned': {
      const operand = node.arguments[0];
      const width = operand === undefined ? 1 : shapeOf(operand, context).width;
      return { width, signed: shared.names.text(node.path[0]!) === '$signed' };
    }
    case '$clog2':
      return { width: 32, signed: true };
  }
  const binding = resolveCalled(context.scope, node.path);
  if (binding?.kind !== 'routine') return oneBit;
  return resultShape(binding.syntax, { ...context, scope: binding.scope });
}

/** Width and sign of what a function returns; `context` is that of its declaration. */
function resultShape(routine: RoutineItem, context: Context): Shape {
  if (routine.resultType === 'integer') return { width: 32, signed: true };
  if (routine.resultType === 'time') return { width: 64, signed: false };
  if (routine.range === undefined) return { width: 1, signed: routine.signed };
  const left = integerOf(routine.range.left, context);
  const right = integerOf(routine.range.right, context);
  if (left === undefined || right === undefined) return { width: 1, signed: routine.signed };
  const width = withinLimit(Math.abs(left - right) + 1, routine.range, context);
  return { width, signed: routine.signed };
}

/** The value of an expression that must be constant; a diagnostic and undefined if it is not. */
export function constantIn(expression: Expression, context: Context): Constant | undefined {
  const known = quickValue(expression, context);
  if (known !== undefined) return known;
  const { shared } = context.scope;
  shared.budget.spend(STEPS_OF_CONSTANT);
  const errors = errorsMet(shared);
  const { width, signed } = shapeOf(expression, context);
  const folded = context.services.fold(expression, context, width, signed);
  if (folded !== undefined) return { width, signed, value: folded, unknown: 0n };
  const bits = context.services.lower(expression, context, width, signed);
  const value: Known | undefined = knownOf(bits, context.logic);
  if (value !== undefined) {
    return errorsMet(shared) > errors ? undefined : { width, signed, ...value };
  }
  report(
    shared,
    'constant-required',
    expression,
    'this must be a constant, but it depends on signals; use literals and parameters',
  );
  return undefined;
}

/** The value of a number as it is written, if x or z does not fill it up; undefined for all else. */
export function plainNumber(expression: Expression): Constant | undefined {
  if (expression.kind !== 'number' || expression.extends !== 'zero') return undefined;
  const { value, unknown, signed } = expression;
  const width = expression.width ?? unsizedWidth(expression);
  return { width, signed, value: unknown === 0n ? value : value & ~unknown, unknown };
}

// Most constants are a plain number or parameter; they need no nets.
function quickValue(expression: Expression, context: Context): Constant | undefined {
  if (expression.kind === 'number') return plainNumber(expression);
  if (expression.kind !== 'name') return undefined;
  const binding = bindingOf(expression, context);
  return binding?.kind === 'parameter' ? binding.value : undefined;
}

/** A constant as a plain number; a diagnostic and undefined if it is x or beyond 2^31. */
export function integerOf(expression: Expression, context: Context): number | undefined {
  const constant = constantIn(expression, context);
  if (constant === undefined) return undefined;
  const { value, width, signed, unknown } = constant;
  const number = signed ? signedValue(value, width) : value;
  if (unknown === 0n && number >= -0x8000_0000n && number <= 0x7fff_ffffn) return Number(number);
  report(
    context.scope.shared,
    'range-invalid',
    expression,
    unknown === 0n
      ? `${number} is too large a number for this place`
      : 'a number is needed here, but it has x bits',
  );
  return undefined;
}

/** A constant that counts something: at least `least`. */
export function countOf(
  expression: Expression,
  context: Context,
  least: number,
): number | undefined {
  const count = integerOf(expression, context);
  if (count === undefined) return undefined;
  if (count >= least) return count;
  report(
    context.scope.shared,
    'range-invalid',
    expression,
    `a count of at least ${least} is needed here, got ${count}`,
  );
  return undefined;
}

function withinLimit(
  width: number,
  place: Placed,
  context: Context,
  limit: number = MAX_WIDTH,
): number {
  if (width <= limit) return width;
  report(
    context.scope.shared,
    'range-invalid',
    place,
    `${width} bits are more than a value may have (${limit}); split it`,
  );
  return 1;
}
