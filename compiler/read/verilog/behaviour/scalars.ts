import { type NetId, netId } from '../../../circuit/ids.js';
import type { Scope } from '../scope.js';
import type { Expression, NameExpression, SelectExpression } from '../syntax.js';
import type { Logic } from './logic.js';
import { expressionContext } from './process.js';

/** An assignment of one bit, worked out. */
export interface ScalarAssign {
  readonly target: NetId;
  readonly value: NetId;
}

/** Deeper expressions go the general way, which needs no deep stack for long chains. */
const MOST_DEPTH = 30;

const NONE = -1;

/**
 * Builds the gates of a continuous assignment whose target and operands are all single bits that
 * are at hand, joined by bitwise operators and conditionals: nearly all of a netlist that is written
 * with operators. No width, sign, value or z needs to be worked out for these.
 *
 * Returns undefined where there is more to it, and then has built nothing. The gates are those that
 * `lowerTarget` and `lowerExpression` would make, in the same order.
 */
export function lowerScalarAssign(
  target: Expression,
  value: Expression,
  scope: Scope,
): ScalarAssign | undefined {
  const net = netOf(target, scope, true);
  if (net === NONE || !isScalar(value, scope, 0)) return undefined;
  scope.shared.budget.begin(value);
  const { logic } = expressionContext(scope);
  // It is the condition of a general target; the order of nets shall be the same for both.
  logic.constant(1);
  return { target: netId(net), value: build(value, scope, logic) };
}

/** Whether an expression is made of single bits that are at hand. */
function isScalar(node: Expression, scope: Scope, depth: number): boolean {
  if (depth > MOST_DEPTH) return false;
  switch (node.kind) {
    case 'name':
    case 'select':
      return netOf(node, scope, false) !== NONE;
    case 'number':
      return node.width === 1 && node.unknown === 0n && node.highZ === 0n;
    case 'unary':
      return node.operator === '~' && isScalar(node.operand, scope, depth + 1);
    case 'binary':
      return (
        isBitwise(node.operator) &&
        isScalar(node.left, scope, depth + 1) &&
        isScalar(node.right, scope, depth + 1)
      );
    case 'conditional':
      return (
        isScalar(node.condition, scope, depth + 1) &&
        isScalar(node.whenTrue, scope, depth + 1) &&
        isScalar(node.whenFalse, scope, depth + 1)
      );
    default:
      return false;
  }
}

const isBitwise = (operator: string): boolean =>
  operator === '&' || operator === '|' || operator === '^' || operator === '~^';

/** The net of a scalar or of a bit of a vector; `NONE` for all else. */
function netOf(node: Expression, scope: Scope, drives: boolean): number {
  if (scope.netOf === undefined) return NONE;
  if (node.kind === 'name') {
    return isPlain(node) ? scope.netOf(node.path[0]!, undefined, drives) : NONE;
  }
  if (node.kind !== 'select' || !isPlain(node.base)) return NONE;
  const { index } = node;
  if (index.kind !== 'number' || index.width !== undefined || index.unknown !== 0n) return NONE;
  return scope.netOf(node.base.path[0]!, Number(index.value), drives);
}

const isPlain = (base: NameExpression | SelectExpression): base is NameExpression =>
  base.kind === 'name' && base.path.length === 1 && base.indices === undefined;

function build(node: Expression, scope: Scope, logic: Logic): NetId {
  switch (node.kind) {
    case 'number':
      return logic.constant(node.value === 0n ? 0 : 1);
    case 'unary':
      return logic.not(build(node.operand, scope, logic));
    case 'binary': {
      const left = build(node.left, scope, logic);
      const right = build(node.right, scope, logic);
      if (node.operator === '&') return logic.and(left, right);
      if (node.operator === '|') return logic.or(left, right);
      return node.operator === '^' ? logic.xor(left, right) : logic.xnor(left, right);
    }
    case 'conditional': {
      const condition = logic.any([build(node.condition, scope, logic)]);
      const chosen = logic.valueOf(condition);
      if (chosen === 0) return build(node.whenFalse, scope, logic);
      const whenTrue = build(node.whenTrue, scope, logic);
      if (chosen === 1) return whenTrue;
      return logic.mux(condition, build(node.whenFalse, scope, logic), whenTrue);
    }
    default:
      return netId(netOf(node, scope, false));
  }
}
