import type { Circuit } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import { loopsOf } from '../../circuit/loops.js';
import { X } from '../../circuit/values.js';

/** What a circuit remembers from one cycle to the next, and how it starts. */
export interface StateSummary {
  /** Registers, latches and the nets that loops keep: so many bits describe the state. */
  readonly bits: number;
  readonly loopBits: number;
  /** Registers and latches with an asynchronous set or reset; with both, counted in each. */
  readonly withSet: number;
  readonly withReset: number;
  /** Registers and latches to which the netlist gives an initial value. */
  readonly initial: number;
  /** Registers and latches with none of these. */
  readonly unset: number;
}

/** Counts the state bits of a circuit. */
export function stateSummary(circuit: Circuit): StateSummary {
  const { registers, latches } = circuit;
  const loopBits = loopsOf(circuit).keptNets.length;
  const sum = { withSet: 0, withReset: 0, initial: 0, unset: 0 };
  for (const { count, set, reset, initial } of [registers, latches]) {
    for (let i = 0; i < count; i++) {
      const isSet = set[i] !== NO_NET;
      const isReset = reset[i] !== NO_NET;
      const isInitial = initial[i] !== X;
      if (isSet) sum.withSet++;
      if (isReset) sum.withReset++;
      if (isInitial) sum.initial++;
      if (!isSet && !isReset && !isInitial) sum.unset++;
    }
  }
  return { bits: registers.count + latches.count + loopBits, loopBits, ...sum };
}
