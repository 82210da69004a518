import type { Literal, Logic } from './logic.js';
import { writeLiterals } from './writes.js';

/**
 * All that a logic graph is there to compute: next states, conditions of updates, what is written,
 * outputs, faults.
 */
export function sinksOf(logic: Logic): Literal[] {
  return [
    ...logic.next,
    ...logic.updates.flatMap(({ enable, gate }) => [enable, gate]),
    ...logic.writes.flatMap(writeLiterals),
    ...logic.outputs,
    ...logic.faults.map((fault) => fault.when),
  ];
}
