import type { Fault } from '../../runtime/engine.js';
import type { DerivedState } from '../../runtime/stateBits.js';
import type { MemoryShape } from '../circuit/memory.js';
import type { LogicState, LogicWrite, StateUpdate } from '../logic/logic.js';
import type { VectorCode } from './vectorCode.js';

/** Operations of a program. Operands are values; the result of operation i is value `firstResult + i`. */
export const ProgramOp = {
  And: 0,
  Or: 1,
  Xor: 2,
  Not: 3,
  /** `a` selects: `b` where it is 0, `c` where it is 1. */
  Mux: 4,
  /** The whole number 2b + a, see `LogicOp.Pack`. */
  Pack: 5,
  /** A word of memory number `c` at address `a`; none where `b` is 0. See `LogicOp.Load`. */
  Load: 6,
  /** Bit number `c` of the bytes of the word `a`, see `LogicOp.Bit`. */
  Bit: 7,
} as const;

/**
 * How many operands an operation reads, indexed by `ProgramOp`; the rest of `a`, `b` and `c` are
 * plain numbers.
 */
export const operandCount: readonly number[] = [2, 2, 2, 1, 3, 2, 2, 1];

/** Whether the result of an operation is a number or a word, and no bit. */
export const isWide = (op: number): boolean => op === ProgramOp.Pack || op === ProgramOp.Load;

/**
 * What emission and interpretation need of a circuit and nothing else: straight-line operations in
 * order, and where inputs, state and outputs stand.
 *
 * Values are numbered: 0 and 1 are the constants; then come the input bits, the state bits, and
 * the results of the operations. Each value is written once, before it is read. All state bits
 * change together after the last operation: to their `next` value, and where they stand in an
 * update, as it says. Then the writes to memories are carried out in order.
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
  /** See `LogicWrite` of the logic; all literals of it are values here. */
  readonly writes: readonly LogicWrite[];
  /** Values that must be 0 and why, see `Logic.faults`. */
  readonly faults: readonly (Fault & { readonly when: number })[];
  /**
   * First operation of each block, and the number of operations at the end. A block is what one
   * generated function holds.
   */
  readonly blockStart: Uint32Array;
  /**
   * What is computed sixteen bits at a time, if anything. The inputs behind those of the stimulus
   * row are lanes of vectors then.
   */
  readonly vectors?: VectorCode;
}

/** Value number of the first input bit. */
export const FIRST_INPUT = 2;

/** Value number of the first lane of a vector, behind the bits of the stimulus row. */
export const firstLane = (program: Program): number =>
  FIRST_INPUT + (program.vectors?.rowInputs ?? program.inputCount);

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
  /** The memories that all of them read and write, by number. */
  readonly memories: readonly MemoryShape[];
  /** State bits that the programs do not keep, since they follow from others. */
  readonly derived?: readonly DerivedState[];
}
