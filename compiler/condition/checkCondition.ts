import type { Diagnostics } from '../diagnostics/diagnostics.js';
import { hintOf } from '../read/nearest.js';
import { walk } from '../read/verilog/behaviour/walk.js';
import type { Expression, NameExpression } from '../read/verilog/syntax.js';
import type { CircuitScope } from './circuitScope.js';

const systemFunctions: ReadonlySet<string> = new Set(['$signed', '$unsigned', '$clog2']);

/** Says what a condition names that a circuit has not, and where it cannot mean anything. */
export function checkCondition(
  expression: Expression,
  scope: CircuitScope,
  diagnostics: Diagnostics,
): void {
  const { names, sources } = scope.shared;
  walk(expression, (node) => {
    const part = node as Expression;
    const span = sources.span(part.start, part.end);
    if (part.kind === 'name') {
      const message = unknownName(part, scope);
      if (message !== undefined) diagnostics.add('name-undeclared', message, span);
    } else if (part.kind === 'call') {
      const name = part.path.map((id) => names.text(id)).join('.');
      if (systemFunctions.has(name)) return true;
      const message = `\`${name}\` cannot be called here; only ${[...systemFunctions].join(', ')} can`;
      diagnostics.add('not-supported', message, span);
    } else if (part.kind === 'number' && part.unknown !== 0n && !isCompared(part, expression)) {
      const message =
        'x and z can only be compared, by === and !==: to any other operator they are unknown, ' +
        'which counts as false';
      diagnostics.add('not-supported', message, span);
    }
    return true;
  });
}

function unknownName({ path, indices = [] }: NameExpression, scope: CircuitScope) {
  const { names } = scope.shared;
  const elements: string[] = [];
  for (const [i, id] of path.entries()) {
    const index = indices[i];
    // What is worked out has its message where that is done.
    if (index !== undefined && index.kind !== 'number') return undefined;
    elements.push(index === undefined ? names.text(id) : `${names.text(id)}[${index.value}]`);
  }
  if (scope.resolve(elements.map((text) => names.internText(text))) !== undefined) return undefined;
  const text = elements.join('.');
  return `there is no net or memory \`${text}\`${hintOf(text, scope.visibleNames())}`;
}

/** Whether a number is an operand of a case equality, or a part of one that is put together. */
function isCompared(number: Expression, whole: Expression): boolean {
  let isFound = false;
  const look = (operand: Expression): void => {
    if (operand === number) isFound = true;
    if (operand.kind === 'concat' || operand.kind === 'replicate') operand.parts.forEach(look);
  };
  walk(whole, (node) => {
    const part = node as Expression;
    if (part.kind === 'binary' && (part.operator === '===' || part.operator === '!==')) {
      look(part.left);
      look(part.right);
    }
    return !isFound;
  });
  return isFound;
}
