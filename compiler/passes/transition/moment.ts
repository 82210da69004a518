import type { Circuit } from '../../circuit/circuit.js';
import type { Algebra, NetValue } from './algebra.js';
import type { LoopSet } from './loopSet.js';

/** What a settled moment depends on. */
export interface Moment {
  readonly circuit: Circuit;
  readonly algebra: Algebra;
  /** Per net driven by a register or latch: its index among these. */
  readonly elementOf: Int32Array;
  readonly loops: LoopSet;
  /** The value of an input net; clock nets are at their level of the moment. */
  readonly inputs: (net: number) => NetValue;
  /** What each register holds, before asynchronous set and reset act. */
  readonly registers: Float64Array;
  /** What each latch holds. */
  readonly latches: Float64Array;
  /** The moment before; none at the start of a cycle, where all is known to have settled. */
  readonly before?: SettledMoment;
  /** At the start of a cycle: what a net that a loop remembers holds. */
  readonly kept?: (net: number) => NetValue;
  /** Takes what is 1 where a loop does not settle. */
  readonly unsettled: (when: NetValue, nets: Uint32Array) => void;
}

/** A moment in which the logic has settled. */
export interface SettledMoment {
  readonly moment: Moment;
  /** The settled value of a net. */
  value(net: number): NetValue;
  /** What a register or latch holds in this moment, before its pins act. */
  held(net: number): NetValue;
}
