import type { AssignStatement } from '../syntax.js';
import type { Context, Exits } from './context.js';
import { LATER } from './exits.js';
import { type Placed, report } from './report.js';

/** Whether statements are executed for the values at power-up: only what happens at time 0. */
export function isPowerUp({ access }: Context): boolean {
  return access === 'variables';
}

/** Ends an `initial` at a statement that waits, with a warning; `what` names the wait. */
export function leaveForLater({ start }: Placed, what: string, context: Context): Exits {
  const message =
    `what comes after ${what} does not happen at power-up and is left out; ` +
    'assign power-up values before it, and let input ports bring what changes later';
  report(context.scope.shared, 'initial-delayed', { start, end: start }, message);
  return new Map([[LATER, context.logic.one]]);
}

/** Leaves out an assignment with a delay in it; a blocking one holds up what follows as well. */
export function putOffAssign(statement: AssignStatement, context: Context): Exits | undefined {
  if (statement.blocking) return leaveForLater(statement, 'the delay in this assignment', context);
  const message =
    'this assignment is delayed, so it does not happen at power-up and is left out; ' +
    'remove its delay where it gives the power-up value';
  report(context.scope.shared, 'initial-delayed', statement, message);
  return undefined;
}
