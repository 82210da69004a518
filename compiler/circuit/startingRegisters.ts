import type { Circuit } from './circuit.js';
import { NO_NET } from './ids.js';
import { X } from './values.js';

/** Counts the registers that nothing in the netlist ever brings to a known value. */
export function startingRegisters({ registers }: Circuit): { withoutStart: number } {
  let withoutStart = 0;
  for (let r = 0; r < registers.count; r++) {
    const hasControl = registers.set[r] !== NO_NET || registers.reset[r] !== NO_NET;
    if (registers.initial[r] === X && !hasControl) withoutStart++;
  }
  return { withoutStart };
}
