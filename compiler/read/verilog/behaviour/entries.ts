import type { NetId } from '../../../circuit/ids.js';
import { chosenBit } from './floatingBits.js';
import type { Bits, Logic } from './logic.js';
import { selectFrom } from './tables.js';

/**
 * What was assigned to one bit: a value, and the condition under which it was. Where `driven` is 0
 * the value is z; it is absent where the value never is. A copy hands on the z of a net.
 */
export interface Entry {
  readonly value: NetId;
  readonly assigned: NetId;
  readonly driven?: NetId;
  readonly isCopy?: true;
}

/** The entry `one` where a condition is 1, else `zero`; `assigned` is the condition of the result. */
export function eitherEntry(
  condition: NetId,
  zero: Entry,
  one: Entry,
  assigned: NetId,
  logic: Logic,
): Entry {
  if (zero.driven === undefined && one.driven === undefined) {
    return { value: logic.mux(condition, zero.value, one.value), assigned };
  }
  const bit = ({ value, driven }: Entry) => ({ data: value, enable: driven ?? logic.one });
  const { data, enable } = chosenBit(condition, bit(zero), bit(one), logic);
  return withDriven(data, assigned, enable, logic);
}

/** An entry that takes effect after another of the same bit. */
export function overEntry(entry: Entry, before: Entry, logic: Logic): Entry {
  const assigned = logic.or(entry.assigned, before.assigned);
  return eitherEntry(entry.assigned, before, entry, assigned, logic);
}

/** Entry i where `select` has the value i. */
export function tableEntry(
  select: Bits,
  table: readonly (Entry | undefined)[],
  logic: Logic,
): Entry {
  const isZ = (driven: NetId | undefined) => driven !== undefined && logic.valueOf(driven) === 0;
  const value = (i: number) => (isZ(table[i]?.driven) ? undefined : table[i]?.value);
  const assigned = (i: number) => table[i]?.assigned ?? logic.zero;
  const driven = (i: number) => table[i] && (table[i].driven ?? logic.one);
  const mayFloat = table.some((entry) => entry?.driven !== undefined);
  return withDriven(
    selectFrom(select, value, logic) ?? logic.unknown,
    selectFrom(select, assigned, logic)!,
    mayFloat ? selectFrom(select, driven, logic)! : logic.one,
    logic,
  );
}

function withDriven(value: NetId, assigned: NetId, driven: NetId, logic: Logic): Entry {
  return driven === logic.one ? { value, assigned } : { value, assigned, driven };
}
