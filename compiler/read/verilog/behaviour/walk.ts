import type { Expression, NameExpression } from '../syntax.js';

/** A part of the syntax tree that tells its kind. */
interface Node {
  readonly kind: unknown;
}

/**
 * Calls `visit` for every node of a part of the syntax tree in the order of the text; it tells
 * whether the nodes inside are of interest. Trees may be deep, so that there is no recursion.
 */
export function walk(tree: unknown, visit: (node: Node) => boolean): void {
  const pending: unknown[] = [tree];
  while (pending.length > 0) {
    const part = pending.pop();
    if (typeof part !== 'object' || part === null) continue;
    if ('kind' in part && !visit(part)) continue;
    const inner = Array.isArray(part) ? part : Object.values(part);
    for (let i = inner.length - 1; i >= 0; i--) pending.push(inner[i]);
  }
}

/** Whether a part of the syntax tree has a node of a kind. */
export function contains(tree: unknown, kind: string): boolean {
  let isFound = false;
  walk(tree, (node) => {
    isFound ||= node.kind === kind;
    return !isFound;
  });
  return isFound;
}

/** Whether an expression is a net or several, as they are. */
export function isBare(value: Expression): boolean {
  if (value.kind === 'concat') return value.parts.every(isBare);
  return value.kind === 'name' || value.kind === 'select' || value.kind === 'part';
}

/** The names of what an assignment's target assigns, without those in its selects. */
export function assignedNames(target: Expression): NameExpression[] {
  switch (target.kind) {
    case 'name':
      return [target];
    case 'select':
    case 'part':
      return assignedNames(target.base);
    case 'concat':
      return target.parts.flatMap(assignedNames);
    default:
      return [];
  }
}
