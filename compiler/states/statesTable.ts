import type { StatesSummary } from '../run/outlets/statesSummary.js';
import { quoted } from '../waveform/quoted.js';

/**
 * States as comma-separated values (RFC 4180): a row for each state, in which the column `next` is
 * empty and the count is that of its cycles, and behind it one for each transition from it.
 */
export function statesTable(registers: readonly StatesSummary[]): string {
  const rows = registers.flatMap(({ register, states, transitions }) => {
    const blocks = new Map(
      states.map(({ value, cycles, first }) => [value, [[register, value, '', cycles, first]]]),
    );
    // Not looked for state by state: there may be many of both.
    for (const { from, to, count, first } of transitions) {
      blocks.get(from)!.push([register, from, to, count, first]);
    }
    return [...blocks.values()].flat();
  });
  const lines = rows.map((row) => `${row.map((field) => quoted(String(field))).join(',')}\n`);
  return `register,state,next,count,first_cycle\n${lines.join('')}`;
}
