import { Edge, Priority } from '../../../circuit/circuit.js';
import type { NetId } from '../../../circuit/ids.js';
import type { EventSyntax, Statement } from '../syntax.js';
import { type AsyncControl, type Controls, findControls, fixedLevels } from './asyncControls.js';
import type { Context } from './context.js';
import { driveIndex, placeOf } from './drive.js';
import type { Logic } from './logic.js';
import { freshRun } from './process.js';
import type { Entry } from './store.js';
import { joinedWrites } from './wordWrites.js';

/** Turns an edge-sensitive `always` into registers (IEEE 1364.1-2002, clause 5.2). */
export function lowerClocked(
  body: Statement,
  events: readonly EventSyntax[],
  context: Context,
): void {
  const controls = findControls(body, events, context);
  if (controls === undefined) return;
  const { net, level } = controls.clock;
  const fixed = fixedLevels(controls.asynchronous, context);
  // Statements run after the edge; the register's data is what it was before.
  fixed.set(net, context.logic.constant(level));
  const run = freshRun(context, {
    clocked: true,
    outside: (net) => fixed.get(net) ?? net,
    places: context.store.places,
  });
  run.services.execute(body, run);
  const changes = run.store.finish();
  for (const [key, entry] of changes) {
    if (key >= 0 && !driveIndex(key, entry, run)) {
      buildRegister(key, entry, controls, run);
    }
  }
  for (const key of new Set(controls.asynchronous.flatMap(({ values }) => [...values.keys()]))) {
    if (!changes.has(key)) buildRegister(key, undefined, controls, run);
  }
  buildWrites(controls, run);
}

// Where an asynchronous control is active, no clock edge writes.
function buildWrites({ clock, asynchronous }: Controls, { store, logic }: Context): void {
  const active = asynchronous.map(({ edge }) =>
    edge.level === 1 ? edge.net : logic.not(edge.net),
  );
  const isIdle = logic.not(logic.any(active));
  for (const { memory, when, address, data, mask } of joinedWrites(store.finishWords(), logic)) {
    const enable = logic.and(when, isIdle);
    logic.sink.writeMemory(memory.number, {
      clock: clock.net,
      edge: clock.level === 1 ? Edge.Rising : Edge.Falling,
      ...(logic.valueOf(enable) !== 1 && { enable }),
      address,
      data,
      ...(mask.some((net) => logic.valueOf(net) !== 1) && { mask }),
    });
  }
}

// `entry` is undefined for a bit that the clock never changes.
function buildRegister(
  key: NetId,
  entry: Entry | undefined,
  controls: Controls,
  run: Context,
): void {
  const { logic } = run;
  const { clock, asynchronous } = controls;
  const { set, reset, priority, holding } = asyncPins(key, asynchronous, logic);
  placeOf(key, run);
  const initial = run.scope.shared.initialValues.get(key);
  logic.sink.register({
    output: key,
    clock: clock.net,
    edge: clock.level === 1 ? Edge.Rising : Edge.Falling,
    data: entry === undefined ? key : dataOf(key, entry, holding, run),
    priority,
    ...(logic.valueOf(set) !== 0 && { set }),
    ...(logic.valueOf(reset) !== 0 && { reset }),
    ...(initial !== undefined && { initial }),
  });
}

function dataOf(key: NetId, entry: Entry, holding: NetId, { store, logic }: Context): NetId {
  const { value, assigned } = entry;
  if (logic.valueOf(assigned) === 1) return logic.mux(holding, value, key);
  return store.resolve(key, { value, assigned: logic.and(assigned, logic.not(holding)) });
}

interface AsyncPins {
  readonly set: NetId;
  readonly reset: NetId;
  readonly priority: number;
  /** Where a control that leaves the bit alone keeps the clock from changing it. */
  readonly holding: NetId;
}

// First priority first. A bit set to x may become anything, so it is reset.
function asyncPins(key: NetId, controls: readonly AsyncControl[], logic: Logic): AsyncPins {
  const sets: NetId[] = [];
  const resets: NetId[] = [];
  let holding = logic.zero;
  let before = logic.zero;
  const exclusive = changesBack(key, controls);
  for (const { edge, values } of controls) {
    const active = edge.level === 1 ? edge.net : logic.not(edge.net);
    const value = values.get(key);
    const blocked = exclusive ? before : holding;
    const effective = logic.and(active, logic.not(blocked));
    if (value === undefined) holding = logic.or(holding, effective);
    else (value === 1 ? sets : resets).push(effective);
    before = logic.or(before, active);
  }
  const first = controls.find(({ values }) => values.has(key));
  const priority = first?.values.get(key) === 1 ? Priority.SetWins : Priority.ResetWins;
  return { set: logic.any(sets), reset: logic.any(resets), priority, holding };
}

// Set, reset and set again in order of priority: no single priority tells which of the two wins.
function changesBack(key: NetId, controls: readonly AsyncControl[]): boolean {
  const values = controls.flatMap(({ values: all }) => (all.has(key) ? [all.get(key) === 1] : []));
  return values.filter((value, i) => i > 0 && value !== values[i - 1]).length > 1;
}
