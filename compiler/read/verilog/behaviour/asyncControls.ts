import type { NetId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { EventSyntax, Statement } from '../syntax.js';
import { type AsyncValue, type ControlNet, isLoad } from './asyncPins.js';
import type { Context } from './context.js';
import { lowerSelf } from './expressions.js';
import { refuseHeld } from './heldMemory.js';
import { netsNamed } from './namedNets.js';
import { refuse } from './names.js';
import { freshRun, runClocked } from './process.js';
import { report } from './report.js';

/** An edge of the event list and the net it is of. */
interface EdgeNet extends ControlNet {
  readonly event: EventSyntax;
}

/** An asynchronous set, reset or load: what it makes of each bit that it does not leave alone. */
export interface AsyncControl {
  readonly edge: EdgeNet;
  readonly values: ReadonlyMap<NetId, AsyncValue>;
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
 * calls. Each other one, while it is active and those of higher priority are not, gives every bit a
 * constant, leaves it alone, or loads it. So the body is executed with that signal held active,
 * which works for any way of writing the tests.
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
    const first = firstOf(open, body, found, context);
    if (first === undefined) return undefined;
    found.push(first);
    open = open.filter((edge) => edge !== first.edge);
  }
  return found;
}

function firstOf(
  open: readonly EdgeNet[],
  body: Statement,
  higher: readonly AsyncControl[],
  context: Context,
): AsyncControl | undefined {
  const loading: TriedControl[] = [];
  for (const edge of open) {
    const control = tryControl(body, edge, higher, context);
    if (control.loads === undefined) return control;
    loading.push(control);
  }
  // What one loads may be what another one does that is tested before it: it reads that one's signal.
  const isFirst = ({ edge, reads }: TriedControl): boolean =>
    open.every((other) => other === edge || !reads.has(other.net));
  const first = loading.find(isFirst) ?? loading[0]!;
  const reason = first.obstacle ?? swapped(first, body, higher, context);
  if (reason !== undefined) {
    refuseLoad(first, reason, context);
    return undefined;
  }
  tellOfLoad(first, context);
  return first;
}

/** A control, if it is the one that goes first. */
interface TriedControl extends AsyncControl {
  /** Where a bit is loaded with what is no constant; undefined where none is. */
  readonly loads: Position | undefined;
  /** Why this is no load. */
  readonly obstacle: string | undefined;
  readonly reads: ReadonlySet<NetId>;
}

function tryControl(
  body: Statement,
  edge: EdgeNet,
  higher: readonly AsyncControl[],
  context: Context,
): TriedControl {
  const { logic } = context;
  const fixed = fixedLevels(higher, context);
  fixed.set(edge.net, logic.constant(edge.level));
  const outside = (net: NetId): NetId => fixed.get(net) ?? net;
  const { store } = runClocked(body, context, { clocked: false, outside });
  const reads = new Set(store.reads);
  const [written] = store.finishWords().filter(({ when }) => logic.valueOf(when) !== 0);
  if (written !== undefined) refuseHeld(written, ASYNCHRONOUS, context);
  const values = new Map<NetId, AsyncValue>();
  let loads: Position | undefined;
  let obstacle: string | undefined;
  for (const [key, entry] of store.finish()) {
    if (key < 0 || store.loopIndexes.has(key)) continue;
    const isZ = entry.driven !== undefined && logic.valueOf(entry.driven) === 0;
    if (isZ && logic.valueOf(entry.assigned) === 1) {
      values.set(key, 'z');
      continue;
    }
    const result = store.resolve(key, entry);
    if (result === key) continue;
    const constant = logic.valueOf(result);
    values.set(key, constant ?? entry);
    if (constant !== undefined) continue;
    loads ??= store.places.get(key)!;
    if (entry.driven !== undefined) obstacle = 'may be z';
    else if (reads.has(key)) obstacle = 'depends on the variable itself';
  }
  return { edge, values, loads, obstacle, reads };
}

// A reset whose edge leads to the level at which it is not active looks like a load.
function swapped(
  { edge }: TriedControl,
  body: Statement,
  higher: readonly AsyncControl[],
  context: Context,
): string | undefined {
  const other = { ...edge, level: edge.level === 1 ? 0 : 1 } as const;
  const { values } = tryControl(body, other, higher, context);
  const isReset = [...values.values()].every((value) => !isLoad(value)) && values.size > 0;
  return isReset ? 'is made at the level at which the signal is not active' : undefined;
}

const ASYNCHRONOUS = 'is set or reset asynchronously; clear it word by word at clock edges';

/** The levels of controls while they are not active. */
export function fixedLevels(
  controls: readonly AsyncControl[],
  { logic }: Context,
): Map<NetId, NetId> {
  return new Map(controls.map(({ edge }) => [edge.net, logic.constant(edge.level === 1 ? 0 : 1)]));
}

function textOf(edge: EdgeNet, { scope }: Context): string {
  const { source, start, end } = scope.shared.sources.span(edge.event.start, edge.event.end);
  return `\`${source.slice(start, end)}\` in the event list`;
}

function refuseLoad({ edge, loads }: TriedControl, reason: string, context: Context): void {
  const message =
    `${textOf(edge, context)} must set, reset or load what it assigns, but this assignment ` +
    `${reason}; make it at the clock edge, or test the level that the edge leads to`;
  refuse(context, { start: loads!, end: loads! }, message);
}

function tellOfLoad({ edge, loads }: TriedControl, context: Context): void {
  const message =
    `${textOf(edge, context)} loads what is no constant; as in hardware, the variable follows it ` +
    'as long as the signal has the level that the edge leads to';
  report(context.scope.shared, 'sensitivity-incomplete', { start: loads!, end: loads! }, message);
}
