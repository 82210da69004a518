import type { Statement } from '../syntax.js';
import type { Context } from './context.js';
import { refuse } from './names.js';
import { readMemoryFile } from './readMemoryFile.js';
import { report } from './report.js';

// Clause 17: what prints, writes waveforms or steers a simulation.
const ignored =
  /^\$(f?(display|write|strobe|monitor)[bho]?|monitor(on|off)|finish|stop|fclose|fflush|dump\w+|timeformat|printtimescale)$/;

/** Calls of system tasks: those that only show something are left out of the circuit. */
export function executeSystemTask(
  statement: Extract<Statement, { kind: 'callTask' }>,
  context: Context,
): void {
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
