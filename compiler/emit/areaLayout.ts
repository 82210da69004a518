import { firstResult, operandCount, type Program } from '../program/program.js';

/** Where a program's values stand within one of the two memory areas; offsets in bytes. */
export interface AreaLayout {
  /** One byte per output bit, for packing; rounded up to whole groups of 32. */
  readonly outputs: number;
  /** One byte per fault. */
  readonly faults: number;
  /** Two bytes per update: enable and gate. */
  readonly conditions: number;
  /** Per operation: offset of the byte that carries its result to later blocks, or -1. */
  readonly wires: Int32Array;
  /** Bytes of one area. */
  readonly size: number;
}

const roundUp = (value: number, step: number): number => Math.ceil(value / step) * step;

/** Lays out an area: state bits first, then outputs, faults and what passes between blocks. */
export function layArea(program: Program): AreaLayout {
  const outputs = roundUp(program.stateCount, 32);
  const faults = outputs + roundUp(program.outputs.length, 32);
  const conditions = faults + program.faults.length;
  let end = conditions + 2 * program.updates.length;
  const wires = new Int32Array(program.op.length).fill(-1);
  for (const operation of crossing(program)) if (wires[operation] === -1) wires[operation] = end++;
  return { outputs, faults, conditions, wires, size: roundUp(end, 64) };
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
