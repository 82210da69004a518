import type { Expression, NameExpression } from '../syntax.js';

/** Calls `visit` for every name in an expression, those of called functions excepted. */
export function forEachName(expression: Expression, visit: (name: NameExpression) => void): void {
  // An explicit stack: generated netlists have sums of thousands of terms.
  const pending: Expression[] = [expression];
  for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
    if (node.kind === 'name') visit(node);
    pushParts(node, pending);
  }
}

/** Calls `visit` for every name that an assignment to an expression would drive. */
export function forEachTarget(expression: Expression, visit: (name: NameExpression) => void): void {
  if (expression.kind === 'name') visit(expression);
  else if (expression.kind === 'select' || expression.kind === 'part') {
    forEachTarget(expression.base, visit);
  } else if (expression.kind === 'concat') {
    for (const part of expression.parts) forEachTarget(part, visit);
  }
}

function pushParts(node: Expression, pending: Expression[]): void {
  switch (node.kind) {
    case 'name':
      for (const index of node.indices ?? []) if (index !== undefined) pending.push(index);
      break;
    case 'select':
      pending.push(node.index, node.base);
      break;
    case 'part':
      pending.push(node.right, node.left, node.base);
      break;
    case 'concat':
      for (const part of node.parts) pending.push(part);
      break;
    case 'replicate':
      pending.push(node.count);
      for (const part of node.parts) pending.push(part);
      break;
    case 'unary':
      pending.push(node.operand);
      break;
    case 'binary':
      pending.push(node.right, node.left);
      break;
    case 'conditional':
      pending.push(node.whenFalse, node.whenTrue, node.condition);
      break;
    case 'call':
      for (const argument of node.arguments) pending.push(argument);
      break;
    default:
      break;
  }
}
