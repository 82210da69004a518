import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { Binding, Scope } from '../scope.js';
import type { Expression, Statement } from '../syntax.js';
import type { FloatingBits } from './floatingBits.js';
import type { Bits, Logic } from './logic.js';
import type { Store } from './store.js';

/** A function or task as a name means it. */
export type RoutineBinding = Extract<Binding, { readonly kind: 'routine' }>;

/** A call in an expression. */
export type CallExpression = Extract<Expression, { readonly kind: 'call' }>;

/** The blocks that `disable` has left, each with the condition under which it has. */
export type Exits = ReadonlyMap<NameId, NetId>;

/**
 * What expressions and statements call each other through: a function call executes statements,
 * whose expressions may call functions.
 */
export interface Services {
  /** A value in the width and sign of its context; see `lower`. */
  lower(expression: Expression, context: Context, width: number, signed: boolean): Bits;
  /** The value of an expression of plain numbers and the like; see `foldConstant`. */
  fold(
    expression: Expression,
    context: Context,
    width: number,
    signed: boolean,
  ): bigint | undefined;
  /** A constant as a plain number; a diagnostic and undefined if it is none. */
  integer(expression: Expression, context: Context): number | undefined;
  /** The value of a function call, in the function's own width. */
  call(expression: CallExpression, context: Context): FloatingBits;
  /** Runs a statement on the context's store. */
  execute(statement: Statement, context: Context): Exits | undefined;
}

/** Where and on what an expression or statement is worked out. */
export interface Context {
  readonly scope: Scope;
  readonly logic: Logic;
  readonly store: Store;
  readonly services: Services;
  /**
   * What may be read and assigned: all; variables, where their values at power-up are worked out;
   * or locals alone, where a constant is asked for.
   */
  readonly access: 'all' | 'variables' | 'locals';
  /** How many calls deep this is. */
  readonly depth: number;
  /** Names of the blocks and the routine around, which `disable` may leave. */
  readonly enclosing: ReadonlySet<NameId>;
  /** Variables of named blocks met so far: a block entered twice has them once. */
  readonly blocks: Map<Statement, Scope>;
}
