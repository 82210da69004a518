import type { Statement } from '../syntax.js';
import { mayAssign } from './constantCalls.js';
import type { CallExpression, Context } from './context.js';
import { bindingOf, forEachName, isSystemName, refuse } from './names.js';
import { readMemoryFile } from './readMemoryFile.js';
import { report } from './report.js';
import { showsOnly } from './showsOnly.js';
import { walk } from './walk.js';

type TaskCall = Extract<Statement, { kind: 'callTask' }>;

/**
 * Whether a statement does nothing but call tasks that show something: what decides whether they
 * are called, often a comparison with x, has no part in the circuit either, unless it calls a
 * function that assigns something.
 */
export function onlyShows(statement: Statement, context: Context): boolean {
  let rest: Statement | undefined = statement;
  for (; rest?.kind === 'if'; rest = rest.whenFalse) {
    if (!onlyShows(rest.whenTrue, context) || mayAssign(rest.condition, context)) return false;
  }
  switch (rest?.kind) {
    case undefined:
    case 'null':
      return true;
    case 'callTask':
      return showsOnly(rest.path, context);
    case 'block':
      return rest.body.every((part) => onlyShows(part, context));
    case 'case':
      return (
        rest.items.every(({ body }) => onlyShows(body, context)) &&
        !mayAssign([rest.subject, rest.items.map(({ labels }) => labels)], context)
      );
    default:
      return false;
  }
}

/**
 * Says of each task in a statement that only shows something that it is left out, and of names in
 * its conditions if they mean nothing.
 */
export function leaveOut(statement: Statement, context: Context): void {
  const { services } = context;
  let rest: Statement | undefined = statement;
  for (; rest?.kind === 'if'; rest = rest.whenFalse) {
    checkNames(rest.condition, context);
    services.execute(rest.whenTrue, context);
  }
  if (rest?.kind === 'case') {
    checkNames(rest.subject, context);
    for (const { labels, body } of rest.items) {
      checkNames(labels, context);
      services.execute(body, context);
    }
  } else if (rest !== undefined) services.execute(rest, context);
}

// Real numbers may decide what is shown, and signals of a test bench around the design.
function checkNames(condition: unknown, context: Context): void {
  forEachName(condition, (name) => {
    const isReal = context.scope.unusable?.(name.path[0]!) === 'real';
    if (name.path.length === 1 && !isReal) bindingOf(name, context);
  });
}

/** Calls of system tasks: those that only show something are left out of the circuit. */
export function executeSystemTask(statement: TaskCall, context: Context): void {
  const { shared } = context.scope;
  const name = shared.names.text(statement.path[0]!);
  if (showsOnly(statement.path, context)) {
    callAssigning(statement.arguments, context);
    report(shared, 'task-ignored', statement, `\`${name}\` has no part in a circuit; left out`);
  } else if (name === '$readmemh' || name === '$readmemb') {
    readMemoryFile(statement, name === '$readmemh' ? 16 : 2, context);
  } else {
    refuse(context, statement, `\`${name}\` has no meaning in a circuit; leave it out`);
  }
}

/** Calls the functions in a part of the syntax tree that assign something. */
function callAssigning(tree: unknown, context: Context): void {
  walk(tree, (node) => {
    if (node.kind !== 'call' || isSystemName((node as CallExpression).path, context)) return true;
    if (mayAssign(node, context)) context.services.call(node as CallExpression, context);
    return false;
  });
}
