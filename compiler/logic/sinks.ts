import type { Literal, Logic } from './logic.js';
import { mapWrite, writeLiterals } from './writes.js';

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

/** Updates, writes and faults of a graph, with other literals in place of its own. */
export function mapEffects(
  { updates, writes, faults }: Logic,
  by: (literal: Literal) => Literal,
): Pick<Logic, 'updates' | 'writes' | 'faults'> {
  return {
    updates: updates.map((update) => ({
      ...update,
      enable: by(update.enable),
      gate: by(update.gate),
    })),
    writes: writes.map((write) => mapWrite(write, by)),
    faults: faults.map((fault) => ({ ...fault, when: by(fault.when) })),
  };
}
