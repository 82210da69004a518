import { GateKind } from '../../circuit/gates.js';
import { beforeOf, stateOf } from '../../circuit/tables/tableRows.js';
import type { NetValue } from './algebra.js';
import { shownIn } from './pulseControls.js';
import type { Settled } from './settled.js';
import { diagramValue } from './tableValue.js';

/** The moments between which cells look for changes of their inputs. */
export interface TableMoments {
  readonly from: Settled;
  readonly to: Settled;
  /** Whether an input or clock port has moved, and not a capture. */
  readonly isFirst: boolean;
  /** Nothing happens where this is 0. */
  readonly enabled: NetValue;
}

/**
 * What cells that go by tables make of the changes between two settled moments: by entry of
 * `Circuit.tables`, what they hold from now on. Those that stay as they are, are left out.
 */
export function tableEvents(moments: TableMoments): Map<number, NetValue> {
  const { tables } = moments.to.moment;
  const events = new Map<number, NetValue>();
  for (const entry of tables.entries) {
    const held = heldAfter(moments, entry);
    if (held !== undefined) events.set(entry, held);
  }
  return events;
}

function heldAfter(moments: TableMoments, entry: number): NetValue | undefined {
  const { from, to, isFirst, enabled } = moments;
  const { tables, algebra, pulses } = to.moment;
  const moved = tables.movers(entry).filter((place) => {
    const net = tables.input(entry, place);
    return from.value(net) !== to.value(net);
  });
  const output = tables.output(entry);
  const { isDelayed, isGuarded } = pulsesAt(to, output);
  if (moved.length === 0 && !isDelayed) return undefined;
  const before = to.value(output);
  const next = stateAfter(moments, entry, moved);
  const guarded = isGuarded && !isFirst ? shownIn(from, output, next) : next;
  const shown = shownIn(to, output, algebra.mux(enabled, before, guarded));
  const isSame = pulses.delayed.length > 0 ? algebra.areSame(shown, before) : shown === before;
  return isSame ? undefined : shown;
}

// One input after another, in the order of `CellTable`.
function stateAfter(
  { from, to, isFirst }: TableMoments,
  entry: number,
  moved: readonly number[],
): NetValue {
  const { tables, algebra } = to.moment;
  const { diagram, events } = tables.form(entry);
  const { inputs, first, later } = tables.table(entry);
  const taken = new Set<number>();
  let state = to.value(tables.output(entry));
  for (const place of isFirst ? first : later) {
    taken.add(place);
    if (!moved.includes(place)) continue;
    const before = state;
    state = diagramValue(algebra, diagram, events[place]!, (variable) => {
      if (variable === stateOf(inputs)) return before;
      if (variable === beforeOf(inputs)) return from.value(tables.input(entry, place));
      return (taken.has(variable) ? to : from).value(tables.input(entry, variable));
    });
  }
  return state;
}

/** How set and reset act on a cell; not at all in waves where a latch or a gate is beside it. */
function pulsesAt(to: Settled, output: number): { isDelayed: boolean; isGuarded: boolean } {
  const { circuit, elementOf, pulses } = to.moment;
  if (circuit.kind[output] !== GateKind.Register) return { isDelayed: false, isGuarded: false };
  const register = elementOf[output]!;
  return {
    isDelayed: pulses.isDelayed[register] === 1,
    isGuarded: pulses.isGuarded[register] === 1,
  };
}

/**
 * Enters what `tableEvents` found into what registers and latches hold; in the last wave, x where
 * they would still change.
 */
export function heldByTables(
  to: Settled,
  events: ReadonlyMap<number, NetValue>,
  isLast: boolean,
  registers: Float64Array,
  latches: Float64Array,
): void {
  const { tables, circuit, elementOf, algebra } = to.moment;
  for (const [entry, held] of events) {
    const output = tables.output(entry);
    const holders = circuit.kind[output] === GateKind.Register ? registers : latches;
    const before = to.value(output);
    const { unknown } = algebra;
    const doubt = pulsesAt(to, output).isDelayed ? unknown : shownIn(to, output, unknown);
    holders[elementOf[output]!] = isLast
      ? algebra.mux(algebra.differs(held, before), before, doubt)
      : held;
  }
}
