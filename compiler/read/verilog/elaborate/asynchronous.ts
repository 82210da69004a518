import { Priority } from '../../../circuit/circuit.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import type { GateSink } from '../scope.js';
import { buildTruthTable, cofactor, dependsOn, type TruthTable } from './truthTable.js';

/** When a state is set and reset whatever else happens; both where it becomes x. */
export interface Asynchronous {
  readonly set: TruthTable;
  readonly reset: TruthTable;
}

/** Collects set and reset from what the levels give: '0', '1', 'x', or anything else for nothing. */
export function asynchronousOf(outcomes: readonly (string | undefined)[]): Asynchronous {
  const table = (value: string): TruthTable =>
    outcomes.map((each) => (each === value || each === 'x' ? '1' : '0')).join('');
  return { set: table('1'), reset: table('0') };
}

/** Whether set or reset is active at some levels. */
export const isActive = ({ set, reset }: Asynchronous, levels: number): boolean =>
  set[levels] === '1' || reset[levels] === '1';

/** The nets of the pins, inputs absent that never become active. */
export function buildAsynchronous(
  { set, reset }: Asynchronous,
  inputs: readonly NetId[],
  sink: GateSink,
) {
  const net = (table: TruthTable): NetId =>
    table.includes('1') ? buildTruthTable(table, inputs, sink) : NO_NET;
  const overlap = [...set].some((value, i) => value === '1' && reset[i] === '1');
  return {
    set: net(set),
    reset: net(reset),
    priority: overlap ? Priority.Unknown : Priority.ResetWins,
  };
}

/**
 * A function that matters only while set and reset are inactive, with the inputs left out that
 * make them so: `table` may have more inputs than the asynchronous functions, after theirs.
 *
 * Returns the function of the inputs that are left, and their indices.
 */
export function withoutAsynchronous(
  table: TruthTable,
  inputs: number,
  { set, reset }: Asynchronous,
): { readonly table: TruthTable; readonly inputs: readonly number[] } {
  let result = table;
  let either = [...set].map((value, i) => (value === '1' || reset[i] === '1' ? '1' : '0')).join('');
  const left = Array.from({ length: inputs }, (_, input) => input);
  const ownCount = Math.log2(set.length);
  // An input of which one value always means set or reset can be taken to have the other one.
  for (let input = ownCount - 1; input >= 0; input--) {
    const forcing = [0, 1].find((value) => !cofactor(either, input, value).includes('0'));
    if (forcing === undefined || !dependsOn(either, input)) continue;
    result = cofactor(result, input, 1 - forcing);
    either = cofactor(either, input, 1 - forcing);
    left.splice(input, 1);
  }
  return { table: result, inputs: left };
}
