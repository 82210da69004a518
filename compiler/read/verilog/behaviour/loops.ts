import type { AssignStatement, Expression, Statement } from '../syntax.js';
import type { Context, Exits } from './context.js';
import { Sequence } from './exits.js';
import { lowerCondition } from './expressions.js';
import { foldSelf } from './foldConstant.js';
import { LoopCircle } from './loopCircle.js';
import type { Loop } from './loopState.js';
import { isPowerUp } from './powerUp.js';
import { errorsMet, type Placed, report } from './report.js';
import { countOf } from './widths.js';

/** How often the body of one loop is executed at most: where it makes gates, and at power-up. */
const LOOP_LIMIT = 65536;
const POWER_UP_LIMIT = 2 ** 20;

const limitOf = (context: Context): number => (isPowerUp(context) ? POWER_UP_LIMIT : LOOP_LIMIT);

const STEPS_OF_TURN = 4;

type Assign = (statement: AssignStatement, context: Context, isLoopIndex: boolean) => void;

/** Unrolls a `for` loop (clause 9.6). */
export function executeFor(
  statement: Extract<Statement, { kind: 'for' }>,
  context: Context,
  assign: Assign,
): Exits | undefined {
  const { initial, step } = statement;
  assign(initial, context, true);
  const circle = new LoopCircle(statement, context, initial);
  const { shared } = context.scope;
  return unroll(statement, context, () => {
    circle.endTurn();
    const before = errorsMet(shared);
    assign(step, context, true);
    // What cannot be worked out will not end the loop either.
    if (errorsMet(shared) > before) context.store.aborted = true;
    circle.startTurn();
  });
}

/** Unrolls a `while` loop. */
export function executeWhile(
  statement: Extract<Statement, { kind: 'while' }>,
  context: Context,
): Exits | undefined {
  const circle = new LoopCircle(statement, context);
  return unroll(statement, context, () => circle.startTurn());
}

/** Unrolls a `repeat` loop; its count must be constant. */
export function executeRepeat(
  statement: Extract<Statement, { kind: 'repeat' }>,
  context: Context,
): Exits | undefined {
  const count = countOf(statement.count, context, 0) ?? 0;
  if (count > limitOf(context)) abort(statement.count, context);
  const sequence = new Sequence(context);
  for (let i = 0; i < count && !context.store.aborted; i++) {
    if (!sequence.goesOn(context.services.execute(statement.body, context))) break;
  }
  return sequence.close();
}

function unroll(
  { condition, body }: Pick<Loop, 'condition' | 'body'>,
  context: Context,
  step: () => void,
): Exits | undefined {
  const sequence = new Sequence(context);
  const limit = limitOf(context);
  for (let i = 0; goesOn(condition, context); i++) {
    if (i === limit) {
      abort(condition, context);
      break;
    }
    if (!sequence.goesOn(context.services.execute(body, context))) break;
    step();
  }
  return sequence.close();
}

function goesOn(condition: Expression, context: Context): boolean {
  if (context.store.aborted) return false;
  const folded = foldSelf(condition, context);
  if (folded !== undefined) {
    context.scope.shared.budget.spend(STEPS_OF_TURN);
    return folded !== 0n;
  }
  const value = context.logic.valueOf(lowerCondition(condition, context));
  if (value !== undefined) return value === 1;
  context.store.aborted = true;
  const message =
    'this loop ends by a value that depends on signals; give it constant bounds and an `if` inside';
  report(context.scope.shared, 'loop-unbounded', condition, message);
  return false;
}

function abort(place: Placed, context: Context): void {
  context.store.aborted = true;
  const message =
    `this loop runs more than ${limitOf(context)} times, too often to unroll; ` +
    'give it smaller bounds or spread it over clock cycles';
  report(context.scope.shared, 'loop-unbounded', place, message);
}
