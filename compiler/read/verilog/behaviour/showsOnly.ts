import type { NameId } from '../../names.js';
import type { Context } from './context.js';

// Clauses 16 and 17, and the tasks of later standards that report.
const tasks =
  /^\$(f?(display|write|strobe|monitor)[bho]?|monitor(on|off)|finish|stop|fclose|fflush|dump\w+|timeformat|printtimescale|sdf_annotate|fatal|error|warning|info)$/;

/** Whether a path names a task that prints, writes waveforms or steers a simulation. */
export function showsOnly(path: readonly NameId[], { scope }: Pick<Context, 'scope'>): boolean {
  return path.length === 1 && tasks.test(scope.shared.names.text(path[0]!));
}
