import { NO_NET } from '../../circuit/ids.js';
import type { NetValue } from './algebra.js';
import type { SettledMoment } from './moment.js';

/** What the latches hold when the logic has settled. */
export function heldLatches(settled: SettledMoment): Float64Array {
  const { latches } = settled.moment.circuit;
  const held = new Float64Array(latches.count);
  for (let l = 0; l < latches.count; l++) held[l] = settled.value(latches.output[l]!);
  return held;
}

/** What a register holds when the logic has settled: asynchronous set and reset have acted. */
export function heldRegister(settled: SettledMoment, register: number): NetValue {
  const { registers } = settled.moment.circuit;
  const hasControl =
    registers.set[register] !== NO_NET ||
    registers.reset[register] !== NO_NET ||
    settled.moment.tables.of(registers.output[register]!) >= 0;
  return hasControl
    ? settled.value(registers.output[register]!)
    : settled.moment.registers[register]!;
}
