import type { NetId } from '../../../circuit/ids.js';
import type { Value } from '../../../circuit/values.js';
import type { Scope } from '../scope.js';
import { callFunction } from './calls.js';
import { constantSink } from './constantSink.js';
import type { Context, Services } from './context.js';
import { lower } from './expressions.js';
import { Logic } from './logic.js';
import { executeStatement } from './statements.js';
import { Store, type StoreOptions } from './store.js';
import { integerOf } from './widths.js';

const services: Services = {
  lower,
  integer: integerOf,
  call: callFunction,
  execute: executeStatement,
};

/** A context that builds gates into the scope's sink, with a store of its own. */
export function buildingContext(scope: Scope, options?: StoreOptions): Context {
  const logic = new Logic(scope.shared.builder);
  return contextOf(scope, new Store(logic, options), 'all');
}

const expressionContexts = new WeakMap<Scope, Context>();

/** A context for one expression outside of procedures; made once for each scope. */
export function expressionContext(scope: Scope): Context {
  let context = expressionContexts.get(scope);
  if (context === undefined) {
    context = buildingContext(scope);
    expressionContexts.set(scope, context);
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

/** A context in which all is constant: no signal may be read. */
export function constantContext(scope: Scope): Context {
  return contextOf(scope, new Store(new Logic(constantSink)), 'locals');
}

/** A context for power-up: `outside` gives the values that variables have so far. */
export function powerUpContext(scope: Scope, outside: (net: NetId) => Value): Context {
  const logic = new Logic(constantSink);
  const store = new Store(logic, { outside: (net) => logic.constant(outside(net)) });
  return contextOf(scope, store, 'variables');
}

function contextOf(scope: Scope, store: Store, access: Context['access']): Context {
  const { logic } = store;
  const enclosing = new Set<number>();
  const blocks = new Map();
  return { scope, logic, store, services, access, depth: 0, enclosing, blocks };
}
