import type { NetId } from '../../../circuit/ids.js';
import type { LatchPins } from '../../../circuit/pinTable.js';
import { listed } from '../../listed.js';
import type { NameId } from '../../names.js';
import type { EventSyntax, Statement } from '../syntax.js';
import type { Context } from './context.js';
import { driveBit, driveIndex, placeOf } from './drive.js';
import type { Entry } from './entries.js';
import { refuseHeld } from './heldMemory.js';
import { LatchControlSearch } from './latchControls.js';
import { netsNamed, netsOf } from './namedNets.js';
import { forEachName, plainMeaningOf } from './names.js';
import { pathText, report } from './report.js';
import type { Changes } from './store.js';
import { contains } from './walk.js';

/**
 * Turns a level-sensitive `always` into gates, and into latches where a variable keeps its value
 * on some path. `events` is undefined for `@*`.
 */
export function lowerCombinational(
  body: Statement,
  events: readonly EventSyntax[] | undefined,
  context: Context,
): void {
  context.services.execute(body, context);
  const { store } = context;
  const changes = store.finish();
  const [written] = store.finishWords();
  if (written !== undefined) refuseHeld(written, COMBINATIONAL, context);
  if (events !== undefined) checkSensitivity(body, events, changes, context);
  const latched = new Map<NetId, Entry>();
  for (const [key, entry] of changes) {
    if (key < 0 || driveIndex(key, entry, context)) continue;
    if (context.logic.valueOf(entry.assigned) === 1) driveEntry(key, entry, context);
    else if (context.logic.valueOf(entry.assigned) !== 0) latched.set(key, entry);
  }
  if (latched.size === 0) return;
  const isMeant = latched.size === changes.size && !contains(body, 'case');
  const search = isMeant ? new LatchControlSearch(body, context) : undefined;
  for (const [key, entry] of latched) buildLatch(key, entry, search, context);
  if (!isMeant) warnLatches(body, latched, context);
}

function driveEntry(key: NetId, { value, driven, isCopy }: Entry, context: Context): void {
  if (isCopy) context.scope.shared.noteCopy?.(key, value);
  if (driven === undefined) driveBit(key, value, context);
  else {
    placeOf(key, context);
    context.scope.shared.driveFloating!(key, { data: value, enable: driven });
  }
}

function buildLatch(
  key: NetId,
  { value, assigned, driven }: Entry,
  search: LatchControlSearch | undefined,
  context: Context,
): void {
  const { shared } = context.scope;
  placeOf(key, context);
  const { sink } = context.logic;
  const initial = shared.initialValues.get(key);
  const latch = (pins: LatchPins, start: 0 | 1 | undefined): void => {
    sink.latch(start === undefined ? pins : { ...pins, initial: start });
  };
  if (driven === undefined) {
    const pins = search?.pinsOf(key) ?? { enable: assigned, data: value };
    latch({ output: key, ...pins }, initial);
    return;
  }
  const held = { data: sink.net(), enable: sink.net() };
  latch({ output: held.data, enable: assigned, data: value }, initial);
  const start = initial === undefined ? undefined : 1;
  latch({ output: held.enable, enable: assigned, data: driven }, start);
  shared.driveFloating!(key, held);
}

const COMBINATIONAL = 'is written by a process without clock; write it at clock edges';

function checkSensitivity(
  body: Statement,
  events: readonly EventSyntax[],
  changes: Changes,
  context: Context,
): void {
  const named = netsNamed(events, context);
  const missing = new Set<NetId>();
  for (const net of context.store.reads) {
    if (!named.has(net) && !changes.has(net)) missing.add(net);
  }
  if (missing.size === 0) return;
  const names = new Set<string>();
  forEachName(body, (expression) => {
    const binding = plainMeaningOf(expression, context);
    if (netsOf(binding).some((net) => missing.has(net))) {
      names.add(`\`${pathText(context.scope.shared, expression.path)}\``);
    }
  });
  if (names.size === 0) return;
  const place = { start: events[0]!.start, end: events.at(-1)!.end };
  const message =
    `the event list leaves out ${listed([...names])}, which ${names.size === 1 ? 'is' : 'are'} ` +
    'read; it is taken as @*';
  report(context.scope.shared, 'sensitivity-incomplete', place, message);
}

// A process in which all is latched, under plain conditions, is how a latch is described. One
// that also has combinational results, or a case with gaps, more likely forgot a branch.
function warnLatches(body: Statement, latched: ReadonlyMap<NetId, Entry>, context: Context): void {
  const { shared } = context.scope;
  const seen = new Set<NameId>();
  forEachName(body, (expression) => {
    const binding = plainMeaningOf(expression, context);
    if (binding?.kind !== 'signal' && binding?.kind !== 'memory') return;
    const net = netsOf(binding).find((bit) => latched.has(bit));
    if (net === undefined || seen.has(binding.name)) return;
    seen.add(binding.name);
    const start = context.store.places.get(net)!;
    const message =
      `\`${pathText(shared, expression.path)}\` is not assigned on every path and becomes a ` +
      'latch; assign a default first, or complete the branches';
    report(shared, 'latch-inferred', { start, end: start }, message);
  });
}
