import { Edge } from '../../../circuit/circuit.js';
import type { NetId } from '../../../circuit/ids.js';
import type { EventSyntax, Statement } from '../syntax.js';
import { type Controls, findControls, fixedLevels } from './asyncControls.js';
import { type AsyncValue, asyncPins, isLoad } from './asyncPins.js';
import type { Context } from './context.js';
import { driveIndex, placeOf } from './drive.js';
import type { Entry } from './entries.js';
import type { Logic } from './logic.js';
import { runClocked } from './process.js';
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
  const run = runClocked(body, context, { outside: (net) => fixed.get(net) ?? net });
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
  const { store, logic, scope } = run;
  const { initialValues } = scope.shared;
  placeOf(key, run);
  const initial = initialValues.get(key);
  const values = controls.asynchronous.map(({ values: all }) => all.get(key));
  if (entry?.driven === undefined && !values.includes('z')) {
    const own = entry === undefined ? key : store.own(key);
    addRegister({ output: key, own, entry, initial, values }, controls, logic);
    return;
  }
  // Two registers: one for the value, one for whether it is not z.
  const held = { data: logic.sink.net(), enable: logic.sink.net() };
  const { data, enable } = held;
  addRegister({ output: data, own: data, entry, initial, values }, controls, logic);
  const driven = entry && { value: entry.driven ?? logic.one, assigned: entry.assigned };
  const levels = values.map((value): AsyncValue => {
    if (isLoad(value)) return { value: logic.one, assigned: value.assigned };
    return value === undefined ? value : value === 'z' ? 0 : 1;
  });
  const start = initial === undefined ? initial : 1;
  const shared = { entry: driven, initial: start, values: levels } as const;
  addRegister({ output: enable, own: enable, ...shared }, controls, logic);
  scope.shared.driveFloating!(key, held);
}

/** A register apart from its clock. */
interface RegisterPlan {
  readonly output: NetId;
  /** Its value before the edge. */
  readonly own: NetId;
  readonly entry: Entry | undefined;
  readonly initial: 0 | 1 | undefined;
  /** What each asynchronous control makes of it. */
  readonly values: readonly AsyncValue[];
}

function addRegister(plan: RegisterPlan, { clock, asynchronous }: Controls, logic: Logic): void {
  const { output, entry, initial } = plan;
  const edges = asynchronous.map(({ edge }) => edge);
  const { set, reset, priority, holding } = asyncPins(plan.values, edges, logic);
  logic.sink.register({
    output,
    clock: clock.net,
    edge: clock.level === 1 ? Edge.Rising : Edge.Falling,
    data: entry === undefined ? output : dataOf(plan, entry, holding, logic),
    priority,
    ...(logic.valueOf(set) !== 0 && { set }),
    ...(logic.valueOf(reset) !== 0 && { reset }),
    ...(initial !== undefined && { initial }),
  });
}

function dataOf(
  { output, own }: RegisterPlan,
  { value, assigned }: Entry,
  holding: NetId,
  logic: Logic,
): NetId {
  if (logic.valueOf(assigned) === 1) return logic.mux(holding, value, output);
  return logic.mux(logic.and(assigned, logic.not(holding)), own, value);
}
