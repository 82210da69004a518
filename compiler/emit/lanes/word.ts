import type binaryen from 'binaryen';
import type { LaneCount } from '../../../runtime/laneLayout.js';
import { LaneOp } from '../../program/laneProgram.js';

type Expression = binaryen.ExpressionRef;

/** A word with one bit for each lane: how it is held, moved and worked on. */
export interface Word {
  readonly lanes: LaneCount;
  readonly bytes: number;
  readonly type: binaryen.Type;
  /** Registers that an engine has for such words. */
  readonly registers: number;
  /**
   * Values kept in locals at a time, if there is a choice. More than the registers, since not all
   * of them are kept long.
   */
  readonly kept: number;
  /** The same bit in all lanes. */
  constant(bit: 0 | 1): Expression;
  load(offset: number, pointer: Expression): Expression;
  store(offset: number, pointer: Expression, value: Expression): Expression;
  and(a: Expression, b: Expression): Expression;
  or(a: Expression, b: Expression): Expression;
  xor(a: Expression, b: Expression): Expression;
  not(a: Expression): Expression;
  /** `a` and the inverse of `b`. */
  andNot(a: Expression, b: Expression): Expression;
  /** The i32 0 or -1 in all lanes. */
  spread(bits: Expression): Expression;
  /** An i32 that is not 0 where some lane has a 1. */
  any(a: Expression): Expression;
}

/** The word of so many lanes in a module. */
export function wordOf(wasm: typeof binaryen, module: binaryen.Module, lanes: LaneCount): Word {
  if (lanes === 32) return word32(wasm, module);
  return lanes === 64 ? word64(wasm, module) : word128(wasm, module);
}

/** An operation on words. The second operand is a local, read as often as it is needed. */
export function operate(
  word: Word,
  op: number,
  operand: (which: 0 | 1 | 2) => Expression,
): Expression {
  switch (op) {
    case LaneOp.And:
      return word.and(operand(0), operand(1));
    case LaneOp.Or:
      return word.or(operand(0), operand(1));
    case LaneOp.Xor:
      return word.xor(operand(0), operand(1));
    case LaneOp.Not:
      return word.not(operand(0));
    case LaneOp.AndNot:
      return word.andNot(operand(0), operand(1));
    case LaneOp.OrNot:
      return word.or(operand(0), word.not(operand(1)));
    default: {
      // zero ^ (select & (one ^ zero)); inverting `one` inverts what is masked.
      const difference = word.xor(operand(2), operand(1));
      const masked =
        op === LaneOp.Mux ? word.and(operand(0), difference) : word.andNot(operand(0), difference);
      return word.xor(operand(1), masked);
    }
  }
}

// General registers hold addresses as well.
const GENERAL = { registers: 7, kept: 18 };

function word32(wasm: typeof binaryen, { i32 }: binaryen.Module): Word {
  return {
    lanes: 32,
    bytes: 4,
    type: wasm.i32,
    ...GENERAL,
    constant: (bit) => i32.const(-bit),
    load: (offset, pointer) => i32.load(offset, 4, pointer, '0'),
    store: (offset, pointer, value) => i32.store(offset, 4, pointer, value, '0'),
    and: (a, b) => i32.and(a, b),
    or: (a, b) => i32.or(a, b),
    xor: (a, b) => i32.xor(a, b),
    not: (a) => i32.xor(a, i32.const(-1)),
    andNot: (a, b) => i32.and(a, i32.xor(b, i32.const(-1))),
    spread: (bits) => bits,
    any: (a) => a,
  };
}

function word64(wasm: typeof binaryen, { i64 }: binaryen.Module): Word {
  return {
    lanes: 64,
    bytes: 8,
    type: wasm.i64,
    ...GENERAL,
    constant: (bit) => i64.const(BigInt(-bit)),
    load: (offset, pointer) => i64.load(offset, 8, pointer, '0'),
    store: (offset, pointer, value) => i64.store(offset, 8, pointer, value, '0'),
    and: (a, b) => i64.and(a, b),
    or: (a, b) => i64.or(a, b),
    xor: (a, b) => i64.xor(a, b),
    not: (a) => i64.xor(a, i64.const(-1n)),
    andNot: (a, b) => i64.and(a, i64.xor(b, i64.const(-1n))),
    spread: (bits) => i64.extend_s(bits),
    any: (a) => i64.ne(a, i64.const(0n)),
  };
}

function word128(wasm: typeof binaryen, { v128, i32x4 }: binaryen.Module): Word {
  return {
    lanes: 128,
    bytes: 16,
    type: wasm.v128,
    registers: 15,
    kept: 28,
    constant: (bit) => v128.const(new Array<number>(16).fill(bit === 0 ? 0 : 255)),
    load: (offset, pointer) => v128.load(offset, 16, pointer, '0'),
    store: (offset, pointer, value) => v128.store(offset, 16, pointer, value, '0'),
    and: (a, b) => v128.and(a, b),
    or: (a, b) => v128.or(a, b),
    xor: (a, b) => v128.xor(a, b),
    not: (a) => v128.not(a),
    andNot: (a, b) => v128.andnot(a, b),
    spread: (bits) => i32x4.splat(bits),
    any: (a) => v128.any_true(a),
  };
}
