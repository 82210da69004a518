import { Priority } from '../../../circuit/circuit.js';
import type { NetId } from '../../../circuit/ids.js';
import type { Value } from '../../../circuit/values.js';
import type { Logic } from './logic.js';

/** A signal that sets, resets or loads at one level, whatever the clock does. */
export interface ControlNet {
  readonly net: NetId;
  /** The level at which it is active. */
  readonly level: 0 | 1;
}

/** What a control gives a bit that is no constant; it leaves the bit alone where `assigned` is 0. */
export interface Load {
  readonly value: NetId;
  readonly assigned: NetId;
}

/** What a control makes of a bit; undefined where it leaves it alone. */
export type AsyncValue = Value | 'z' | Load | undefined;

/** Pins of a register or latch. */
export interface AsyncPins {
  readonly set: NetId;
  readonly reset: NetId;
  readonly priority: number;
  /** Where a control that leaves the bit alone keeps clock or enable from changing it. */
  readonly holding: NetId;
}

/**
 * Set and reset of a bit by what controls make of it, first priority first. A bit set to x or z may
 * become anything, so it is reset.
 */
export function asyncPins(
  values: readonly AsyncValue[],
  controls: readonly ControlNet[],
  logic: Logic,
): AsyncPins {
  const sets: NetId[] = [];
  const resets: NetId[] = [];
  let holding = logic.zero;
  let before = logic.zero;
  const exclusive = values.some(isLoad) || changesBack(values);
  for (const [i, { net, level }] of controls.entries()) {
    const active = level === 1 ? net : logic.not(net);
    const value = values[i];
    const blocked = exclusive ? before : holding;
    const effective = logic.and(active, logic.not(blocked));
    if (value === undefined) holding = logic.or(holding, effective);
    else if (isLoad(value)) {
      const loads = logic.and(effective, value.assigned);
      sets.push(logic.and(loads, value.value));
      resets.push(logic.and(loads, logic.not(value.value)));
      holding = logic.or(holding, logic.and(effective, logic.not(value.assigned)));
    } else (value === 1 ? sets : resets).push(effective);
    before = logic.or(before, active);
  }
  const first = values.find((value) => value !== undefined);
  const priority = first === 1 && !exclusive ? Priority.SetWins : Priority.ResetWins;
  return { set: logic.any(sets), reset: logic.any(resets), priority, holding };
}

/** Whether a control gives a bit what is no constant. */
export const isLoad = (value: AsyncValue): value is Load => typeof value === 'object';

// Set, reset and set again in order of priority: no single priority tells which of the two wins.
function changesBack(values: readonly AsyncValue[]): boolean {
  const sets = values.filter((value) => value !== undefined).map((value) => value === 1);
  return sets.filter((value, i) => i > 0 && value !== sets[i - 1]).length > 1;
}
