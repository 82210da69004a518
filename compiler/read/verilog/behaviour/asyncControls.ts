import type { NetId } from '../../../circuit/ids.js';
import type { Value } from '../../../circuit/values.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { EventSyntax, Statement } from '../syntax.js';
import { netsNamed } from './combinational.js';
import type { Context } from './context.js';
import { lowerSelf } from './expressions.js';
import { refuseHeld } from './heldMemory.js';
import { refuse } from './names.js';
import { freshRun, runClocked } from './process.js';

/** An edge of the event list and the net it is of. */
interface EdgeNet {
  readonly event: EventSyntax;
  readonly net: NetId;
  /** The value after the edge: 1 for posedge, 0 for negedge. */
  readonly level: 0 | 1;
}

/** An asynchronous set or reset: what it makes of each bit that it does not leave alone. */
export interface AsyncControl {
  readonly edge: EdgeNet;
  readonly values: ReadonlyMap<NetId, Value | 'z'>;
}

/** The clock and the asynchronous controls of an edge-sensitive process, first priority first. */
export interface Controls {
  readonly clock: EdgeNet;
  readonly asynchronous: readonly AsyncControl[];
}

/**
 * Finds out what the edges of an event list are for.
 *
 * The clock is the one whose signal the body does not read, by itself or in routines that it
 * calls. Each other one must, while it is active and those of higher priority are not, give every
 * bit a constant or leave it alone. So the body is executed with that signal held active, which
 * works for any way of writing the tests.
 */
export function findControls(
  body: Statement,
  events: readonly EventSyntax[],
  context: Context,
): Controls | undefined {
  const edges = events.map((event): EdgeNet => {
    const net = lowerSelf(event.expression, context)[0]!;
    return { event, net, level: event.edge === 'posedge' ? 1 : 0 };
  });
  if (edges.length === 1) return { clock: edges[0]!, asynchronous: [] };
  const clock = clockAmong(edges, body, context);
  if (clock === undefined) return undefined;
  const asynchronous = inPriority(
    body,
    edges.filter((edge) => edge !== clock),
    context,
  );
  return asynchronous && { clock, asynchronous };
}

function clockAmong(
  edges: readonly EdgeNet[],
  body: Statement,
  context: Context,
): EdgeNet | undefined {
  const place = { start: edges[0]!.event.start, end: edges.at(-1)!.event.end };
  if (new Set(edges.map(({ net }) => net)).size < edges.length) {
    const message =
      'no register captures at several edges of one signal; use an always for each edge, and ' +
      'choose between what they assign';
    refuse(context, place, message);
    return undefined;
  }
  const unread = (nets: ReadonlySet<NetId>) => edges.filter((edge) => !nets.has(edge.net));
  let clocks = unread(netsNamed(body, context));
  // The names in the text mostly tell; a routine or a select in it takes a closer look.
  if (clocks.length !== 1) clocks = unread(netsRead(body, context));
  const [clock, ...others] = clocks;
  if (clock !== undefined && others.length === 0) return clock;
  const message =
    clock === undefined
      ? 'no edge here can be the clock, because the body reads all these signals'
      : 'several of these edges could be the clock, because the body does not read their signals';
  const way = 'test every set and reset by an if, and the clock nowhere';
  refuse(context, place, `${message}; ${way}`);
  return undefined;
}

/** The bits that a body reads, in routines too, before it assigns them. */
function netsRead(body: Statement, context: Context): ReadonlySet<NetId> {
  const { places } = context.store;
  const run = freshRun(context, { clocked: true, places });
  run.services.execute(body, run);
  return run.store.reads;
}

function inPriority(
  body: Statement,
  edges: readonly EdgeNet[],
  context: Context,
): AsyncControl[] | undefined {
  const found: AsyncControl[] = [];
  let open = edges;
  while (open.length > 0) {
    let first: AsyncControl | undefined;
    let obstacle: Position | undefined;
    for (const edge of open) {
      const values = valuesUnder(body, edge, found, context);
      if (values instanceof Map) {
        first = { edge, values };
        break;
      }
      obstacle ??= values;
    }
    if (first === undefined) {
      refuseLoad(open[0]!, obstacle!, context);
      return undefined;
    }
    found.push(first);
    open = open.filter((edge) => edge !== first.edge);
  }
  return found;
}

/** What each bit becomes while a control is active, or where a bit is assigned no constant. */
function valuesUnder(
  body: Statement,
  edge: EdgeNet,
  higher: readonly AsyncControl[],
  context: Context,
): Map<NetId, Value | 'z'> | Position {
  const { logic } = context;
  const fixed = fixedLevels(higher, context);
  fixed.set(edge.net, logic.constant(edge.level));
  const run = runClocked(body, context, { outside: (net) => fixed.get(net) ?? net });
  const [written] = run.store.finishWords().filter(({ when }) => logic.valueOf(when) !== 0);
  if (written !== undefined) refuseHeld(written, ASYNCHRONOUS, context);
  const values = new Map<NetId, Value | 'z'>();
  for (const [key, entry] of run.store.finish()) {
    if (key < 0 || run.store.loopIndexes.has(key)) continue;
    const isZ = entry.driven !== undefined && logic.valueOf(entry.driven) === 0;
    if (isZ && logic.valueOf(entry.assigned) === 1) {
      values.set(key, 'z');
      continue;
    }
    const result = run.store.resolve(key, entry);
    if (result === key) continue;
    const value = logic.valueOf(result);
    if (value === undefined) return context.store.places.get(key)!;
    values.set(key, value);
  }
  return values;
}

const ASYNCHRONOUS = 'is set or reset asynchronously; clear it word by word at clock edges';

/** The levels of controls while they are not active. */
export function fixedLevels(
  controls: readonly AsyncControl[],
  { logic }: Context,
): Map<NetId, NetId> {
  return new Map(controls.map(({ edge }) => [edge.net, logic.constant(edge.level === 1 ? 0 : 1)]));
}

function refuseLoad(edge: EdgeNet, start: Position, context: Context): void {
  const { shared } = context.scope;
  const { start: from, end } = edge.event;
  const span = shared.sources.span(from, end);
  const text = span.source.slice(span.start, span.end);
  const message =
    `\`${text}\` in the event list must set or reset what it assigns to constants, but this ` +
    'assignment depends on signals; load it at the clock edge, or test the level that the edge ' +
    'leads to';
  refuse(context, { start, end: start }, message);
}
