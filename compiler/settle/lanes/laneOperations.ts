import { ProgramOp } from '../../program/program.js';

/** Words of 32 lanes that every operation works on together. */
export const BLOCK_WORDS = 4;

/** Lanes in a block. */
export const BLOCK_LANES = 128;

/**
 * Runs operations of one kind, each on a block of lanes.
 *
 * `memory` holds values of four words each from word `base` on, and from `at` on the operands of
 * the operations: places of values, counted from `base`. Results go to the words from `result` on
 * up to `end`. Returns where the operands of the next operations stand.
 */
export function runOperations(
  kind: number,
  memory: Int32Array,
  base: number,
  at: number,
  result: number,
  end: number,
): number {
  switch (kind) {
    case ProgramOp.And:
      return ands(memory, base, at, result, end);
    case ProgramOp.Or:
      return ors(memory, base, at, result, end);
    case ProgramOp.Xor:
      return xors(memory, base, at, result, end);
    case ProgramOp.Not:
      return nots(memory, base, at, result, end);
    default:
      return muxes(memory, base, at, result, end);
  }
}

// The four words are written out: a loop around them would take longer than the work in it.

function ands(memory: Int32Array, base: number, first: number, from: number, end: number): number {
  let at = first;
  for (let to = from; to < end; to += BLOCK_WORDS, at += 2) {
    const a = base + memory[at]!;
    const b = base + memory[at + 1]!;
    memory[to] = memory[a]! & memory[b]!;
    memory[to + 1] = memory[a + 1]! & memory[b + 1]!;
    memory[to + 2] = memory[a + 2]! & memory[b + 2]!;
    memory[to + 3] = memory[a + 3]! & memory[b + 3]!;
  }
  return at;
}

function ors(memory: Int32Array, base: number, first: number, from: number, end: number): number {
  let at = first;
  for (let to = from; to < end; to += BLOCK_WORDS, at += 2) {
    const a = base + memory[at]!;
    const b = base + memory[at + 1]!;
    memory[to] = memory[a]! | memory[b]!;
    memory[to + 1] = memory[a + 1]! | memory[b + 1]!;
    memory[to + 2] = memory[a + 2]! | memory[b + 2]!;
    memory[to + 3] = memory[a + 3]! | memory[b + 3]!;
  }
  return at;
}

function xors(memory: Int32Array, base: number, first: number, from: number, end: number): number {
  let at = first;
  for (let to = from; to < end; to += BLOCK_WORDS, at += 2) {
    const a = base + memory[at]!;
    const b = base + memory[at + 1]!;
    memory[to] = memory[a]! ^ memory[b]!;
    memory[to + 1] = memory[a + 1]! ^ memory[b + 1]!;
    memory[to + 2] = memory[a + 2]! ^ memory[b + 2]!;
    memory[to + 3] = memory[a + 3]! ^ memory[b + 3]!;
  }
  return at;
}

function nots(memory: Int32Array, base: number, first: number, from: number, end: number): number {
  let at = first;
  for (let to = from; to < end; to += BLOCK_WORDS, at++) {
    const a = base + memory[at]!;
    memory[to] = ~memory[a]!;
    memory[to + 1] = ~memory[a + 1]!;
    memory[to + 2] = ~memory[a + 2]!;
    memory[to + 3] = ~memory[a + 3]!;
  }
  return at;
}

function muxes(memory: Int32Array, base: number, first: number, from: number, end: number): number {
  let at = first;
  for (let to = from; to < end; to += BLOCK_WORDS, at += 3) {
    const select = base + memory[at]!;
    const zero = base + memory[at + 1]!;
    const one = base + memory[at + 2]!;
    memory[to] = chosen(memory[select]!, memory[zero]!, memory[one]!);
    memory[to + 1] = chosen(memory[select + 1]!, memory[zero + 1]!, memory[one + 1]!);
    memory[to + 2] = chosen(memory[select + 2]!, memory[zero + 2]!, memory[one + 2]!);
    memory[to + 3] = chosen(memory[select + 3]!, memory[zero + 3]!, memory[one + 3]!);
  }
  return at;
}

/** Bit by bit, `zero` where `select` is 0 and `one` where it is 1. */
export const chosen = (select: number, zero: number, one: number): number =>
  zero ^ (select & (zero ^ one));
