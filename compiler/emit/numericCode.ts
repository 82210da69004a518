import type binaryen from 'binaryen';
import { VectorOp } from '../program/vectorCode.js';

/** A number given in sixteens of bits, the lowest first. */
export function numberCode(
  module: binaryen.Module,
  sixteens: readonly number[],
): binaryen.ExpressionRef {
  const number = sixteens.reduceRight((high, low) => high * 0x10000n + BigInt(low), 0n);
  return constant64(module, BigInt.asIntN(64, number));
}

/** The operation of a step on numbers, or from them or to them; see `VectorOp`. */
export function numericCode(
  module: binaryen.Module,
  op: number,
  a: binaryen.ExpressionRef,
  b: binaryen.ExpressionRef = 0,
  shift = 0,
): binaryen.ExpressionRef {
  const { i8x16, i16x8, i32, i64, i64x2 } = module;
  const amount = (): binaryen.ExpressionRef => constant64(module, BigInt(Math.abs(shift)));
  switch (op) {
    case VectorOp.Number:
      // Only the top bit of each byte counts, and bit 0 gets there in wider lanes too.
      return i64.extend_u(i8x16.bitmask(i16x8.shl(a, i32.const(7))));
    case VectorOp.Add:
      return i64.add(a, b);
    case VectorOp.Shift:
      return shift < 0 ? i64.shr_u(a, amount()) : i64.shl(a, amount());
    case VectorOp.Join:
      return i64.or(a, b);
    case VectorOp.Mask:
      return i64.and(a, b);
    case VectorOp.Flip:
      return i64.xor(a, b);
    default:
      return i64x2.splat(a);
  }
}

// The declared type is that of an earlier version, which took two halves.
function constant64(module: binaryen.Module, value: bigint): binaryen.ExpressionRef {
  return (module.i64.const as unknown as (value: bigint) => binaryen.ExpressionRef)(value);
}
