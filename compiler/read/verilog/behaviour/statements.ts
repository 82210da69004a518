import type { Scope } from '../scope.js';
import type { AssignStatement, Statement } from '../syntax.js';
import { assignExpression } from './assign.js';
import { callTask } from './calls.js';
import { executeCase } from './cases.js';
import { executeIf } from './conditions.js';
import type { Context, Exits } from './context.js';
import { Sequence } from './exits.js';
import { LocalScope } from './localScope.js';
import { declareLocals } from './locals.js';
import { executeFor, executeRepeat, executeWhile } from './loops.js';
import { isSystemName, refuse } from './names.js';
import { isPowerUp, leaveForLater, putOffAssign } from './powerUp.js';
import { type Placed, pathText } from './report.js';
import { executeSystemTask, leaveOut, onlyShows } from './systemTasks.js';

/** Executes a statement symbolically on the context's store (clause 9). */
export function executeStatement(statement: Statement, context: Context): Exits | undefined {
  if (context.store.aborted) return undefined;
  const { budget } = context.scope.shared;
  budget.enter(statement, 0);
  const exits = executeKind(statement, context);
  budget.leave();
  return exits;
}

function executeKind(statement: Statement, context: Context): Exits | undefined {
  switch (statement.kind) {
    case 'block':
      return executeBlock(statement, context);
    case 'assign':
      if (statement.delayed && isPowerUp(context)) return putOffAssign(statement, context);
      return executeAssign(statement, context, false);
    case 'delay':
      if (isPowerUp(context)) return leaveForLater(statement, 'this delay', context);
      return context.services.execute(statement.body, context);
    case 'event':
    case 'wait':
      if (isPowerUp(context)) return leaveForLater(statement, 'this wait', context);
      refuseStatement(statement, context);
      return undefined;
    case 'if':
    case 'case':
      if (onlyShows(statement, context)) {
        leaveOut(statement, context);
        return undefined;
      }
      if (statement.kind === 'if') return executeIf(statement, context);
      return executeCase(statement, context);
    case 'for':
      return executeFor(statement, context, executeAssign);
    case 'repeat':
      return executeRepeat(statement, context);
    case 'while':
      return executeWhile(statement, context);
    case 'callTask':
      if (!isSystemName(statement.path, context)) return callTask(statement, context);
      executeSystemTask(statement, context);
      return undefined;
    case 'disable':
      return executeDisable(statement, context);
    case 'null':
      return undefined;
    default:
      refuseStatement(statement, context);
      return undefined;
  }
}

function executeBlock(
  statement: Extract<Statement, { kind: 'block' }>,
  context: Context,
): Exits | undefined {
  const { name, declarations, body } = statement;
  let inside = context;
  if (name !== 0 || declarations.length > 0) {
    const enclosing = new Set([...context.enclosing, name]);
    inside = { ...context, scope: blockScope(statement, context), enclosing };
  }
  const sequence = new Sequence(context);
  for (const part of body) {
    if (!sequence.goesOn(context.services.execute(part, inside))) break;
  }
  return sequence.close(name);
}

// The variables of a block in an `always` are declared with the module; those of a block in a
// function live with the call.
function blockScope(statement: Extract<Statement, { kind: 'block' }>, context: Context): Scope {
  const known = context.scope.block?.(statement.name) ?? context.blocks.get(statement);
  if (known !== undefined) return known;
  const local = new LocalScope(context.scope);
  declareLocals(statement.declarations, local, context);
  context.blocks.set(statement, local);
  return local;
}

function executeAssign(
  statement: AssignStatement,
  context: Context,
  isLoopIndex: boolean,
): undefined {
  const { target, value, blocking, start } = statement;
  const { index, offset } = context.scope.shared.sources.locate(start);
  context.logic.sink.at(index, offset);
  assignExpression(target, value, context, { blocking, place: start, isLoopIndex });
}

function executeDisable(
  statement: Extract<Statement, { kind: 'disable' }>,
  context: Context,
): Exits | undefined {
  const name = statement.path.at(-1)!;
  if (statement.path.length === 1 && context.enclosing.has(name)) {
    return new Map([[name, context.logic.one]]);
  }
  const text = pathText(context.scope.shared, statement.path);
  const message = `\`disable ${text}\` leaves no block around it; disable an enclosing named block`;
  refuse(context, statement, message);
  return undefined;
}

function refuseStatement(
  statement: Extract<Statement, { kind: 'event' | 'wait' | 'procedural' | 'forever' }>,
  context: Context,
): void {
  const place: Placed = { start: statement.start, end: statement.start };
  switch (statement.kind) {
    case 'event':
      refuse(
        context,
        place,
        'an event control inside a procedure is not possible in a cycle model; ' +
          'put a single @(...) in front of the whole always and keep the step in a register',
      );
      break;
    case 'wait':
      refuse(
        context,
        place,
        '`wait` is not possible in a cycle model; keep the state in a register and use if',
      );
      break;
    case 'forever':
      refuse(
        context,
        place,
        '`forever` has no end in a cycle model; use always @(...), and an input port as the clock',
      );
      break;
    default:
      refuse(context, place, proceduralRefusal(statement.keyword));
  }
}

function proceduralRefusal(keyword: string): string {
  switch (keyword) {
    case 'fork':
      return '`fork` is not possible in a cycle model; use begin, and `<=` for what goes side by side';
    case '->':
      return 'a named event is not possible in a circuit; set a register for one cycle instead';
    case '@':
      return (
        'an assignment that waits is not possible in a cycle model; ' +
        'keep the value in a register until then'
      );
    default:
      return (
        `procedural \`${keyword}\` is not possible in a circuit; ` +
        'use an ordinary assignment under a condition'
      );
  }
}
