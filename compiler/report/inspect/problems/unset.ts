import { NO_NET } from '../../../circuit/ids.js';
import { X } from '../../../circuit/values.js';
import { counted } from '../netWords.js';
import type { ProblemContext } from './context.js';

/** Registers that nothing in the netlist brings to a known value. */
export function findUnset({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  const { output, initial, set, reset, count } = circuit.registers;
  const unset = output.filter(
    (_, r) => initial[r] === X && set[r] === NO_NET && reset[r] === NO_NET,
  );
  if (unset.length === 0) return;
  const message =
    `${unset.length.toLocaleString('en-US')} of ${counted(count, 'register')} ` +
    `${unset.length === 1 ? 'has' : 'have'} neither an initial value nor a set or reset: ` +
    words.list(unset);
  diagnostics.add('register-no-start', message, words.span(unset[0]!));
}
