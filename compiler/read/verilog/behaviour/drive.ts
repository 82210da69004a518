import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import type { Context } from './context.js';
import type { Entry } from './entries.js';

const constantKinds = [GateKind.Zero, GateKind.One, GateKind.Unknown] as const;

/** Drives a bit of a variable by its value. */
export function driveBit(key: NetId, value: NetId, context: Context): void {
  const { logic } = context;
  placeOf(key, context);
  const constant = logic.valueOf(value);
  if (constant === undefined) logic.sink.drive(key, GateKind.Buf, [value]);
  else logic.sink.drive(key, constantKinds[constant], []);
}

/**
 * Drives a bit of the index of an unrolled loop by its last value; returns whether that is done.
 *
 * Such an index is no state, and several processes may use one variable for their loops: the first
 * one drives it. An index whose last value depends on signals, because `disable` leaves the loop,
 * is to be driven as any other variable.
 */
export function driveIndex(key: NetId, entry: Entry, context: Context): boolean {
  const { store, logic } = context;
  if (!store.loopIndexes.has(key)) return false;
  if (logic.sink.isDriven(key)) return true;
  if (logic.valueOf(entry.value) === undefined) return false;
  driveBit(key, entry.value, context);
  return true;
}

/** Lets what is built next have its origin where a bit was assigned. */
export function placeOf(key: NetId, { store, scope, logic }: Context): void {
  const place = store.places.get(key);
  if (place === undefined) return;
  const { index, offset } = scope.shared.sources.locate(place);
  logic.sink.at(index, offset);
}
