import { UPDATE_WIDTH } from '../logic/logic.js';
import { firstLane, firstResult, firstState, type Program } from '../program/program.js';
import type { AreaLayout } from './areaLayout.js';
import { LANES } from './lanes.js';

/** The places in the next area where a value is to be stored. */
export interface Sinks {
  /** Per operation, offsets of the bytes that take its result; undefined for most. */
  readonly ofOperation: readonly (readonly number[] | undefined)[];
  /** Stores of values that no operation makes: constants, inputs and states. */
  readonly copies: readonly Copy[];
  /** Stores of lanes, which must wait for the vectors. */
  readonly laneCopies: readonly Copy[];
}

/** A value that is stored as it is, and the offset where. */
export type Copy = readonly [value: number, offset: number];

/** The value of a condition that an update does not have. */
export const ALWAYS = 1;

/** Lists where results go. `outputsInMemory` are the output bits that pass through memory. */
export function storesOf(
  program: Program,
  area: AreaLayout,
  outputsInMemory: Iterable<number>,
): Sinks {
  const first = firstResult(program);
  const ofOperation: number[][] = new Array(program.op.length);
  const copies: Copy[] = [];
  const laneCopies: Copy[] = [];
  const isLane = (value: number): boolean =>
    value >= firstLane(program) && value < firstState(program);
  const addTo = (operation: number, offset: number): void => {
    const known = ofOperation[operation];
    if (known === undefined) ofOperation[operation] = [offset];
    else known.push(offset);
  };
  const add = (value: number, offset: number): void => {
    if (value < first) (isLane(value) ? laneCopies : copies).push([value, offset]);
    else addTo(value - first, offset);
  };
  const copied = copiedStates(program);
  for (const [bit, value] of program.next.entries()) if (copied[bit] === 0) add(value, bit);
  for (const bit of outputsInMemory) add(program.outputs[bit]!, area.outputs + bit);
  for (const [update, { enable, gate }] of program.updates.entries()) {
    if (enable !== ALWAYS) add(enable, area.conditions + 2 * update);
    if (gate !== ALWAYS) add(gate, area.conditions + 2 * update + 1);
  }
  for (const [value, offset] of area.staging.stores) add(value, offset);
  for (const [fault, { when }] of program.faults.entries()) add(when, area.faults + fault);
  for (const { slot, values } of program.vectors?.stages.flatMap(({ gathers }) => gathers) ?? []) {
    for (const [lane, value] of values.entries()) {
      if (value >= 0) add(value, area.slots + slot * LANES + lane);
    }
  }
  for (const [operation, offset] of area.wires.entries()) {
    if (offset >= 0) addTo(operation, offset);
  }
  return { ofOperation, copies, laneCopies };
}

// State bits that no result is stored for: an update or a vector makes them, or nothing is there.
function copiedStates({ stateCount, states, updates, vectors }: Program): Uint8Array {
  const copied = Uint8Array.from({ length: stateCount }, (_, bit) =>
    states[bit]!.role === 'unused' ? 1 : 0,
  );
  for (const { first, from } of updates) if (from >= 0) copied.fill(1, first, first + UPDATE_WIDTH);
  for (const { to } of vectors?.states ?? []) copied.fill(1, to, to + LANES);
  return copied;
}
