import type { Scope } from '../scope.js';
import type { Item, Statement } from '../syntax.js';
import { lowerCombinational } from './combinational.js';
import { refuse } from './names.js';
import { buildingContext } from './process.js';
import { lowerClocked } from './registers.js';

type AlwaysItem = Extract<Item, { kind: 'always' }>;

/**
 * Turns an `always` into gates, registers and latches (IEEE 1364-2005, clause 9.9.2), in the style
 * of IEEE 1364.1-2002.
 *
 * Edges make registers, with asynchronous set and reset; levels and `@*` make gates, and latches
 * where a variable keeps its value on some path. Power-up values are taken from
 * `scope.shared.initialValues`, so every `initial` comes first. Where a condition is x, both
 * branches merge as in a multiplexer.
 */
export function lowerAlways(item: AlwaysItem, scope: Scope): void {
  scope.shared.budget.begin(item);
  const body = withoutBlocks(item.body);
  const place = { start: item.start, end: item.start };
  const context = buildingContext(scope, { clocked: false });
  if (body.kind !== 'event') {
    refuse(
      context,
      place,
      'this always has no event control in front; write always @(posedge clock) or always @*, ' +
        'and let an input port be the clock',
    );
    return;
  }
  const events = body.events;
  const edges = (events ?? []).filter((event) => event.edge !== 'any');
  if (events === undefined || edges.length === 0) {
    lowerCombinational(body.body, events, context);
  } else if (edges.length === events.length) {
    lowerClocked(body.body, edges, context);
  } else {
    const level = events.find((event) => event.edge === 'any')!;
    refuse(
      context,
      level,
      'an event list cannot mix edges and levels; give every signal posedge or negedge',
    );
  }
}

// `always begin @(…) … end` says the same as `always @(…) …`, and a delay in front adds nothing.
function withoutBlocks(statement: Statement): Statement {
  if (statement.kind === 'delay') return withoutBlocks(statement.body);
  if (statement.kind !== 'block' || statement.name !== 0) return statement;
  const [first, ...others] = statement.body;
  return first !== undefined && others.length === 0 ? withoutBlocks(first) : statement;
}
