import {
  FIRST_LANE_INPUT,
  firstLaneResult,
  firstLaneState,
  LaneOp,
  type LaneProgram,
} from '../../compiler/program/laneProgram.js';

/** The values of a lane program, by number, for inputs and states as they are kept. */
export function laneValues(
  program: LaneProgram,
  inputs: ArrayLike<number>,
  states: ArrayLike<number>,
): Int32Array {
  const first = firstLaneResult(program);
  const values = new Int32Array(first + program.op.length);
  values[1] = -1;
  values.set(Array.from(inputs), FIRST_LANE_INPUT);
  values.set(Array.from(states), firstLaneState(program));
  for (let i = 0; i < program.op.length; i++) {
    const operands = [program.a[i]!, program.b[i]!, program.c[i]!].map((value) => values[value]!);
    values[first + i] = laneResult(program.op[i]!, operands);
  }
  return values;
}

/** What an operation on words of 32 lanes gives. */
export function laneResult(op: number, [a = 0, b = 0, c = 0]: readonly number[]): number {
  switch (op) {
    case LaneOp.And:
      return a & b;
    case LaneOp.Or:
      return a | b;
    case LaneOp.Xor:
      return a ^ b;
    case LaneOp.Not:
      return ~a;
    case LaneOp.AndNot:
      return a & ~b;
    case LaneOp.OrNot:
      return a | ~b;
    case LaneOp.Mux:
      return (a & c) | (~a & b);
    default:
      return (a & ~c) | (~a & b);
  }
}
