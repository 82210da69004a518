import type { StatesSummary } from '../run/outlets/statesSummary.js';
import { quoted } from '../waveform/quoted.js';

/**
 * States as comma-separated values (RFC 4180): a row for each state, in which the column `next` is
 * empty and the count is that of its cycles, and behind it one for each transition from it.
 */
export function statesTable(registers: readonly StatesSummary[]): string {
  const rows = registers.flatMap(({ register, states, transitions }) =>
    states.flatMap(({ value, cycles, first }) => [
      [register, value, '', cycles, first],
      ...transitions
        .filter(({ from }) => from === value)
        .map(({ to, count, first: taken }) => [register, value, to, count, taken]),
    ]),
  );
  const lines = rows.map((row) => `${row.map((field) => quoted(String(field))).join(',')}\n`);
  return `register,state,next,count,first_cycle\n${lines.join('')}`;
}
