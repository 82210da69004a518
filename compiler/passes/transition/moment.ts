import type { Circuit } from '../../circuit/circuit.js';
import type { Pulses } from '../../circuit/pulses.js';
import type { ActiveTables } from '../../circuit/tables/activeTables.js';
import type { Algebra, NetValue } from './algebra.js';
import type { LoopSet } from './loopSet.js';
import type { MemoryLogic, PendingWrite } from './memoryLogic.js';

/** What a settled moment depends on. */
export interface Moment {
  readonly circuit: Circuit;
  readonly algebra: Algebra;
  /** Per net driven by a register or latch: its index among these. */
  readonly elementOf: Int32Array;
  /** Nets that go by a table. */
  readonly tables: ActiveTables;
  /** Registers on which set and reset act in waves. */
  readonly pulses: Pulses;
  readonly loops: LoopSet;
  /** The value of an input net; clock nets are at their level of the moment. */
  readonly inputs: (net: number) => NetValue;
  /** What each register holds, before asynchronous set and reset act. */
  readonly registers: Float64Array;
  /** What each latch holds. */
  readonly latches: Float64Array;
  readonly memories: MemoryLogic;
  /** What has been written to memories since the cycle began, in order. */
  readonly writes: readonly PendingWrite[];
  /** The moment before; none at the start of a cycle, where all is known to have settled. */
  readonly before?: SettledMoment;
  /** At the start of a cycle: what a net that a loop remembers holds. */
  readonly kept?: (net: number) => NetValue;
  /**
   * Takes what is 1 where a loop does not settle, its nets, and the rounds that it is given, unless
   * it would not settle in more of them.
   */
  readonly unsettled: (when: NetValue, nets: Uint32Array, rounds?: number) => void;
}

/** A moment in which the logic has settled. */
export interface SettledMoment {
  readonly moment: Moment;
  /** The settled value of a net. */
  value(net: number): NetValue;
  /** What a register or latch holds in this moment, before its pins act. */
  held(net: number): NetValue;
}
