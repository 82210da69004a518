import type { Fault } from '../../runtime/engine.js';
import type { LogicState, StateUpdate } from '../logic/logic.js';

/** Operations of a program. Operands are values; the result of operation i is value `firstResult + i`. */
export const ProgramOp = {
  And: 0,
  Or: 1,
  Xor: 2,
  Not: 3,
  /** `a` selects: `b` where it is 0, `c` where it is 1. */
  Mux: 4,
} as const;

/** How many operands an operation reads, indexed by `ProgramOp`. */
export const operandCount: readonly number[] = [2, 2, 2, 1, 3];

/**
 * What emission and interpretation need of a circuit and nothing else: straight-line operations in
 * order, and where inputs, state and outputs stand.
 *
 * Values are numbered: 0 and 1 are the constants; then come the input bits, the state bits, and
 * the results of the operations. Each value is written once, before it is read. All state bits
 * change together after the last operation: to their `next` value, and where they stand in an
 * update, as it says.
 */
export interface Program {
  /** Bits of a stimulus row that operations may read. */
  readonly inputCount: number;
  readonly stateCount: number;
  readonly op: Uint8Array;
  readonly a: Uint32Array;
  readonly b: Uint32Array;
  readonly c: Uint32Array;
  /** Value of each bit of the response row. */
  readonly outputs: Uint32Array;
  /** Value that each state bit takes at the end of the cycle, or that its update takes. */
  readonly next: Uint32Array;
  readonly states: readonly LogicState[];
  /** 1 for a state bit that is kept inverted. */
  readonly stateInverted: Uint8Array;
  /** See `StateUpdate` of the logic; `enable` and `gate` are values, value 1 where there is none. */
  readonly updates: readonly StateUpdate[];
  /** Values that must be 0 and why, see `Logic.faults`. */
  readonly faults: readonly (Fault & { readonly when: number })[];
  /**
   * First operation of each block, and the number of operations at the end. A block is what one
   * generated function holds.
   */
  readonly blockStart: Uint32Array;
}

/** Value number of the first input bit. */
export const FIRST_INPUT = 2;

/** Value number of the first state bit. */
export const firstState = (program: Program): number => FIRST_INPUT + program.inputCount;

/** Value number of the first operation's result. */
export const firstResult = (program: Program): number => firstState(program) + program.stateCount;

/**
 * The programs of a circuit's cycles. Where all clocks tick together there is one; with clocks of
 * their own pace there is one for each different cycle, all with the same inputs, states and
 * outputs.
 */
export interface CyclePrograms {
  readonly programs: readonly Program[];
  /** Which program each cycle runs; after the last comes the first again. */
  readonly pattern: Uint8Array;
}
