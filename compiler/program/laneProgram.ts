import type { Fault } from '../../runtime/engine.js';
import type { LogicState } from '../logic/logic.js';

/** Operations of a lane program, each on one bit for every lane. */
export const LaneOp = {
  And: 0,
  Or: 1,
  Xor: 2,
  Not: 3,
  /** `a` selects: `b` where it is 0, `c` where it is 1. */
  Mux: 4,
  /** `a` and the inverse of `b`. */
  AndNot: 5,
  /** `a` or the inverse of `b`. */
  OrNot: 6,
  /** `a` selects: `b` where it is 0, the inverse of `c` where it is 1. */
  MuxNot: 7,
} as const;

/** How many operands an operation reads, indexed by `LaneOp`. */
export const laneOperands: readonly number[] = [2, 2, 2, 1, 3, 2, 2, 3];

/**
 * One clock cycle of many independent sequences, the lanes: straight-line operations in order, and
 * where inputs, state and outputs stand. Every value has one bit for each lane.
 *
 * Values are numbered as in `Program`: 0 and 1 are the constants; then come the input bits, the
 * state bits, and the results of the operations. Each is written once, before it is read. All state
 * bits change together after the last operation.
 */
export interface LaneProgram {
  readonly inputCount: number;
  readonly stateCount: number;
  readonly op: Uint8Array;
  readonly a: Uint32Array;
  readonly b: Uint32Array;
  readonly c: Uint32Array;
  /** Value of each bit of the response row. */
  readonly outputs: Uint32Array;
  /** Value that each state bit takes at the end of the cycle. */
  readonly next: Uint32Array;
  /** What the state bits hold, in the order in which they are stored. */
  readonly states: readonly LogicState[];
  /** 1 for a state bit that is kept inverted. */
  readonly stateInverted: Uint8Array;
  /** Values that must be 0 and why, see `Logic.faults`. */
  readonly faults: readonly (Fault & { readonly when: number })[];
}

/** Value number of the first input bit. */
export const FIRST_LANE_INPUT = 2;

/** Value number of the first state bit. */
export const firstLaneState = (program: LaneProgram): number =>
  FIRST_LANE_INPUT + program.inputCount;

/** Value number of the first operation's result. */
export const firstLaneResult = (program: LaneProgram): number =>
  firstLaneState(program) + program.stateCount;

/** The programs of a circuit's cycles for lanes, see `CyclePrograms`. */
export interface LanePrograms {
  readonly programs: readonly LaneProgram[];
  readonly pattern: Uint8Array;
  /** Whether the module can count ones and changes in its response; for 128 lanes alone. */
  readonly counts?: boolean;
}
