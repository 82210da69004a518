import type { Statement } from '../syntax.js';
import type { Context } from './context.js';
import { refuse } from './names.js';
import { readMemoryFile } from './readMemoryFile.js';
import { report } from './report.js';
import { walk } from './walk.js';

type TaskCall = Extract<Statement, { kind: 'callTask' }>;

// Clause 17, and the tasks of later standards that report: what prints, writes waveforms or steers a simulation.
const ignored =
  /^\$(f?(display|write|strobe|monitor)[bho]?|monitor(on|off)|finish|stop|fclose|fflush|dump\w+|timeformat|printtimescale|fatal|error|warning|info)$/;

/**
 * Whether a statement does nothing but call tasks that show something: what decides whether they
 * are called, often a comparison with x, has no part in the circuit either.
 */
export function onlyShows(statement: Statement, context: Context): boolean {
  switch (statement.kind) {
    case 'null':
      return true;
    case 'callTask': {
      const name = context.scope.shared.names.text(statement.path[0]!);
      return statement.path.length === 1 && ignored.test(name);
    }
    case 'block':
      return statement.body.every((part) => onlyShows(part, context));
    case 'if':
      return (
        onlyShows(statement.whenTrue, context) &&
        (statement.whenFalse === undefined || onlyShows(statement.whenFalse, context))
      );
    case 'case':
      return statement.items.every(({ body }) => onlyShows(body, context));
    default:
      return false;
  }
}

/** Says of each task in a statement that only shows something that it is left out. */
export function leaveOut(statement: Statement, context: Context): void {
  walk(statement, (node) => {
    if (node.kind === 'callTask') executeSystemTask(node as TaskCall, context);
    return true;
  });
}

/** Calls of system tasks: those that only show something are left out of the circuit. */
export function executeSystemTask(statement: TaskCall, context: Context): void {
  const { shared } = context.scope;
  const name = shared.names.text(statement.path[0]!);
  if (ignored.test(name)) {
    report(shared, 'task-ignored', statement, `\`${name}\` has no part in a circuit; left out`);
  } else if (name === '$readmemh' || name === '$readmemb') {
    readMemoryFile(statement, name === '$readmemh' ? 16 : 2, context);
  } else {
    refuse(context, statement, `\`${name}\` has no meaning in a circuit; leave it out`);
  }
}
