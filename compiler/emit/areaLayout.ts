import { firstResult, isWide, operandCount, type Program } from '../program/program.js';
import { LANES } from './lanes.js';
import { type Staging, stageWrites } from './memory/staging.js';
import { stepHomes, vectorParts } from './vectorParts.js';

/** Address of the first area; what lies below stays zero. */
export const FIRST_AREA = 1024;

/** Where a program's values stand within one of the two memory areas; offsets in bytes. */
export interface AreaLayout {
  /** One byte per output bit, for packing; rounded up to whole groups of 32. */
  readonly outputs: number;
  /** One byte per fault. */
  readonly faults: number;
  /** Two bytes per update: enable and gate. */
  readonly conditions: number;
  /** Sixteen bytes per lane slot. */
  readonly slots: number;
  /** Where the bits of writes to memories wait. */
  readonly staging: Staging;
  /**
   * Per operation: offset of the byte that carries its result to later blocks, or -1; four
   * bytes where it is no bit.
   */
  readonly wires: Int32Array;
  /** Bytes of one area. */
  readonly size: number;
}

const roundUp = (value: number, step: number): number => Math.ceil(value / step) * step;

/** Lays out an area: state bits first, then outputs, faults and what passes between blocks. */
export function layArea(program: Program): AreaLayout {
  const slotCount = program.vectors
    ? stepHomes(program.vectors, vectorParts(program.vectors).flat()).slotCount
    : 0;
  const outputs = roundUp(program.stateCount, 32);
  const faults = outputs + roundUp(program.outputs.length, 32);
  const conditions = faults + program.faults.length;
  const slots = roundUp(conditions + 2 * program.updates.length, LANES);
  const staging = stageWrites(program, slots, slots + LANES * slotCount);
  let end = staging.end;
  const wires = new Int32Array(program.op.length).fill(-1);
  for (const operation of crossing(program)) {
    if (wires[operation] !== -1) continue;
    wires[operation] = end;
    end += isWide(program.op[operation]!) ? 4 : 1;
  }
  return { outputs, faults, conditions, slots, staging, wires, size: roundUp(end, 64) };
}

// Operations whose result is read in a later block; may name one several times.
function* crossing(program: Program): Iterable<number> {
  const first = firstResult(program);
  const columns = [program.a, program.b, program.c];
  for (let block = 0; block + 1 < program.blockStart.length; block++) {
    const start = program.blockStart[block]!;
    const end = program.blockStart[block + 1]!;
    for (let i = start; i < end; i++) {
      for (let k = 0; k < operandCount[program.op[i]!]!; k++) {
        const operand = columns[k]![i]! - first;
        if (operand >= 0 && operand < start) yield operand;
      }
    }
  }
}
