import { stepOperands, type VectorCode, VectorOp } from '../program/vectorCode.js';

/** Steps in one function; beyond some thousand instructions, functions are compiled worse. */
const STEPS_IN_BLOCK = 500;

/** Which steps one function computes, and which of them it must pass on. */
export interface VectorPart {
  readonly start: number;
  readonly end: number;
}

/**
 * Where results of steps are kept between functions: a slot of the program, or one of the slots
 * behind these.
 */
export interface StepHomes {
  /** Per step its slot, or -1. */
  readonly slotOf: Int32Array;
  readonly slotCount: number;
}

/** Finds a home for each step that a later part reads. */
export function stepHomes(code: VectorCode, parts: readonly VectorPart[]): StepHomes {
  const slotOf = new Int32Array(code.steps.length).fill(-1);
  let slotCount = code.slotCount;
  for (const { step, to } of code.slots) slotOf[step] = to;
  const home = (step: number, start: number): void => {
    if (step < start && slotOf[step] === -1 && isComputed(code, step)) slotOf[step] = slotCount++;
  };
  for (const { start, end } of parts) {
    for (let step = start; step < end; step++) {
      const { op, a, b, c } = code.steps[step]!;
      const operands = [a, b, c].slice(0, stepOperands[op]);
      for (const operand of operands) home(operand, start);
    }
  }
  const start = parts.at(-1)?.start ?? 0;
  for (const { step } of [...code.states, ...code.outputs, ...code.rows]) home(step, start);
  return { slotOf, slotCount };
}

// State, slots and splats are in memory as they are: they are loaded where they are read.
const isComputed = ({ steps }: VectorCode, step: number): boolean =>
  steps[step]!.op > VectorOp.Splat && steps[step]!.op !== VectorOp.Constant;

/** The steps of each stage cut into parts of one function each. */
export function vectorParts({ stages }: VectorCode): VectorPart[][] {
  let start = 0;
  return stages.map(({ stepEnd }) => {
    const parts: VectorPart[] = [];
    for (; start < stepEnd; start = Math.min(stepEnd, start + STEPS_IN_BLOCK)) {
      parts.push({ start, end: Math.min(stepEnd, start + STEPS_IN_BLOCK) });
    }
    return parts;
  });
}
