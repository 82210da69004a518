import { firstResult, operandCount, type Program, ProgramOp } from '../program/program.js';

/**
 * The operations of a program, reordered so that equal ones stand together, as far as each still
 * comes after what it reads. Deciding what to do once per run instead of once per operation is what
 * makes an interpreter fast.
 */
export interface Bytecode {
  /** Pairs of numbers: a `ProgramOp`, and how many operations of that kind follow each other. */
  readonly runs: Uint32Array;
  /**
   * The operands of all operations in order, `operandCount` for each: values by new number; behind
   * those of `Load` and `Bit` the plain number.
   */
  readonly operands: Uint32Array;
  /** New number of each value of the program. Results are numbered in the new order. */
  readonly renumbered: Uint32Array;
}

/** Orders a program for interpretation. Takes time and space in proportion to its operations. */
export function bytecodeOf(program: Program): Bytecode {
  const { order, runs } = groupedOrder(program);
  const first = firstResult(program);
  const renumbered = Uint32Array.from({ length: first + order.length }, (_, value) => value);
  order.forEach((operation, place) => {
    renumbered[first + operation] = first + place;
  });
  const count = program.op.reduce((sum, op) => sum + operandCount[op]! + Number(hasPlain(op)), 0);
  const operands = new Uint32Array(count);
  let at = 0;
  for (const operation of order) {
    eachOperand(program, operation, (value) => {
      operands[at++] = renumbered[value]!;
    });
    if (hasPlain(program.op[operation]!)) operands[at++] = program.c[operation]!;
  }
  return { runs: Uint32Array.from(runs), operands, renumbered };
}

// Words and their bits have a plain number behind their operands.
const hasPlain = (op: number): boolean => op === ProgramOp.Load || op === ProgramOp.Bit;

// The kind of which most operations are ready runs until none is left, those included that become
// ready meanwhile: far fewer runs than going level by level.
function groupedOrder(program: Program): { order: Uint32Array; runs: number[] } {
  const { op } = program;
  const { start, reader, missing } = readersOf(program);
  const order = new Uint32Array(op.length);
  const ready: number[][] = operandCount.map(() => []);
  const runs: number[] = [];
  let placed = 0;
  for (let i = 0; i < op.length; i++) if (missing[i] === 0) ready[op[i]!]!.push(i);
  while (placed < op.length) {
    const kind = indexOfLongest(ready);
    const run = ready[kind]!;
    for (let at = 0; at < run.length; at++) {
      const operation = run[at]!;
      order[placed++] = operation;
      for (let i = start[operation]!; i < start[operation + 1]!; i++) {
        const next = reader[i]!;
        if (--missing[next]! === 0) ready[op[next]!]!.push(next);
      }
    }
    runs.push(kind, run.length);
    ready[kind] = [];
  }
  return { order, runs };
}

/** Per operation, the operations that read its result, and how many results it reads itself. */
function readersOf(program: Program) {
  const count = program.op.length;
  const first = firstResult(program);
  const start = new Uint32Array(count + 1);
  const missing = new Uint8Array(count);
  for (let i = 0; i < count; i++) {
    eachOperand(program, i, (value) => {
      if (value < first) return;
      start[value - first + 1]!++;
      missing[i]!++;
    });
  }
  for (let i = 0; i < count; i++) start[i + 1]! += start[i]!;
  const reader = new Uint32Array(start[count]!);
  const next = start.slice(0, count);
  for (let i = 0; i < count; i++) {
    eachOperand(program, i, (value) => {
      if (value >= first) reader[next[value - first]!++] = i;
    });
  }
  return { start, reader, missing };
}

function eachOperand(program: Program, operation: number, visit: (value: number) => void): void {
  const count = operandCount[program.op[operation]!]!;
  visit(program.a[operation]!);
  if (count > 1) visit(program.b[operation]!);
  if (count > 2) visit(program.c[operation]!);
}

function indexOfLongest(lists: readonly (readonly number[])[]): number {
  let longest = 0;
  for (let i = 1; i < lists.length; i++) {
    if (lists[i]!.length > lists[longest]!.length) longest = i;
  }
  return longest;
}
