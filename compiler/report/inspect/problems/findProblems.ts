import { type Diagnostic, Diagnostics } from '../../../diagnostics/diagnostics.js';
import { findCaseTwins } from './caseTwins.js';
import { findClockProblems } from './clocks.js';
import type { ProblemContext } from './context.js';
import { findCrossings } from './crossings.js';
import { findFloating } from './floating.js';
import { findLoops } from './loops.js';
import { findUnconnectedPorts } from './ports.js';
import { findPulses } from './pulses.js';
import { findUnset } from './unset.js';
import { findUnused } from './unused.js';

/**
 * What is odd about a circuit, beside what reading its text has shown: one diagnostic for each
 * kind, with a count and the first names, and one for each of the first loops.
 */
export function findProblems(context: Omit<ProblemContext, 'diagnostics'>): readonly Diagnostic[] {
  const all: ProblemContext = { ...context, diagnostics: new Diagnostics() };
  findLoops(all);
  findPulses(all);
  findFloating(all);
  findUnconnectedPorts(all);
  findClockProblems(all);
  findCrossings(all);
  findUnset(all);
  findUnused(all);
  findCaseTwins(all);
  return all.diagnostics.list;
}
