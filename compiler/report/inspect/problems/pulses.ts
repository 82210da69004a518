import { pulsesOf } from '../../../circuit/pulses.js';
import { counted } from '../../figures.js';
import type { ProblemContext } from './context.js';

/** Registers whose set or reset follows from their own outputs. */
export function findPulses({ design: { circuit }, words, diagnostics }: ProblemContext): void {
  const { delayed } = pulsesOf(circuit);
  if (delayed.length === 0) return;
  const nets = delayed.map((register) => circuit.registers.output[register]!);
  const message =
    `the set or reset of ${counted(nets.length, 'register')} follows from their own outputs, ` +
    `which makes pulses without length: ${words.list(nets)}`;
  diagnostics.add('self-reset', message, words.span(nets[0]!));
}
