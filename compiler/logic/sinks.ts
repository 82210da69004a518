import type { Literal, Logic } from './logic.js';

/** All that a logic graph is there to compute: next states, conditions of updates, outputs, faults. */
export function sinksOf(logic: Logic): Literal[] {
  return [
    ...logic.next,
    ...logic.updates.flatMap(({ enable, gate }) => [enable, gate]),
    ...logic.outputs,
    ...logic.faults.map((fault) => fault.when),
  ];
}
