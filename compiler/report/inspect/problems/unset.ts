import { openStarts } from '../../../circuit/startingRegisters.js';
import { counted, figure } from '../../figures.js';
import type { ProblemContext } from './context.js';

/** Registers that nothing in the netlist brings to a known value. */
export function findUnset({ design, words, diagnostics }: ProblemContext): void {
  const { output, count } = design.circuit.registers;
  const unset = openStarts(design).map((r) => output[r]!);
  if (unset.length === 0) return;
  const message =
    `${figure(unset.length)} of ${counted(count, 'register')} ` +
    `${unset.length === 1 ? 'has' : 'have'} neither an initial value nor a set or reset: ` +
    words.list(unset);
  diagnostics.add('register-no-start', message, words.span(unset[0]!));
}
