import type { NetId } from '../../../circuit/ids.js';
import type { Value } from '../../../circuit/values.js';
import type { Budget } from '../budget.js';
import type { Scope } from '../scope.js';
import type { Statement } from '../syntax.js';
import { callFunction } from './calls.js';
import { constantSink } from './constantSink.js';
import type { Context, Services } from './context.js';
import { lower } from './expressions.js';
import { foldConstant } from './foldConstant.js';
import { Logic } from './logic.js';
import { executeStatement } from './statements.js';
import { Store, type StoreOptions } from './store.js';
import { integerOf } from './widths.js';

const services: Services = {
  lower,
  fold: foldConstant,
  integer: integerOf,
  call: callFunction,
  execute: executeStatement,
};

/** A context that builds gates into the scope's sink, with a store of its own. */
export function buildingContext(scope: Scope, options?: StoreOptions): Context {
  const logic = new Logic(scope.shared.builder, scope.shared.budget);
  return contextOf(scope, new Store(logic, options), 'all');
}

/** By the budget, which a design has one of: one for each module would fill the memory. */
const expressionContexts = new WeakMap<Budget, Context>();

/** A context for one expression outside of procedures; the next call makes it void. */
export function expressionContext(scope: Scope): Context {
  const { shared } = scope;
  let context = expressionContexts.get(shared.budget);
  if (context?.scope !== scope) {
    // A module may have a hundred thousand scopes, of which each has few expressions.
    context = context?.scope.shared === shared ? { ...context, scope } : buildingContext(scope);
    expressionContexts.set(shared.budget, context);
  }
  // Netlists are full of tiny assignments, so that making a context would take most of the time.
  context.logic.clear();
  context.store.clear();
  return context;
}

/** The same process once more, from the start, with the gates made so far at hand. */
export function freshRun(context: Context, options: StoreOptions): Context {
  return { ...context, store: new Store(context.logic, options), blocks: new Map() };
}

/** Executes the body of a clocked process; the result has its store. */
export function runClocked(body: Statement, context: Context, options: StoreOptions): Context {
  const { places } = context.store;
  const run = (more: StoreOptions): Context => {
    const fresh = freshRun(context, { clocked: true, places, ...options, ...more });
    fresh.services.execute(body, fresh);
    return fresh;
  };
  const first = run({});
  const composed = first.store.composedBits();
  return composed.size === 0 ? first : run({ composed });
}

/** Contexts for constants, one for each that is being worked out inside of another. */
interface ConstantContexts {
  used: number;
  readonly list: Context[];
}

const constantContexts = new WeakMap<Budget, ConstantContexts>();

/**
 * Works something out in a context in which all is constant: no signal may be read. The context is
 * void afterwards.
 */
export function withConstants<T>(scope: Scope, work: (context: Context) => T): T {
  const { budget } = scope.shared;
  let known = constantContexts.get(budget);
  if (known === undefined) {
    known = { used: 0, list: [] };
    constantContexts.set(budget, known);
  }
  const { used, list } = known;
  let context = list[used];
  if (context?.scope !== scope) {
    context =
      context === undefined
        ? contextOf(scope, new Store(new Logic(constantSink)), 'locals')
        : { ...context, scope };
    list[used] = context;
  }
  known.used++;
  context.store.clear();
  context.blocks.clear();
  try {
    return work(context);
  } finally {
    known.used = used;
  }
}

/** A context for power-up: `outside` gives the values that variables have so far. */
export function powerUpContext(scope: Scope, outside: (net: NetId) => Value): Context {
  const logic = new Logic(constantSink);
  const store = new Store(logic, { outside: (net) => logic.constant(outside(net)) });
  return contextOf(scope, store, 'variables');
}

const nothing: ReadonlySet<number> = new Set();

function contextOf(scope: Scope, store: Store, access: Context['access']): Context {
  const { logic } = store;
  const blocks = new Map();
  return { scope, logic, store, services, access, depth: 0, enclosing: nothing, blocks };
}
