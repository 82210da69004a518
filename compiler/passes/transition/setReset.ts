import { Priority } from '../../circuit/circuit.js';
import type { Algebra, NetValue } from './algebra.js';

/** What a register or latch shows while asynchronous set and reset act on what it holds. */
export function withSetReset(
  algebra: Algebra,
  held: NetValue,
  set: NetValue,
  reset: NetValue,
  priority: number,
): NetValue {
  if (priority === Priority.SetWins) {
    return algebra.mux(set, algebra.mux(reset, held, algebra.zero), algebra.one);
  }
  const shown = algebra.mux(reset, algebra.mux(set, held, algebra.one), algebra.zero);
  if (priority === Priority.ResetWins) return shown;
  return algebra.mux(algebra.and(set, reset), shown, algebra.unknown);
}
