import { evaluateConstant } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { RangeSyntax } from '../syntax.js';
import type { BlockScope } from './blockScope.js';

/** Left and right index of a vector. */
export interface Range {
  readonly msb: number;
  readonly lsb: number;
}

/** The widest vector; wider ones are taken for a mistake. */
const MAX_WIDTH = 1 << 20;

/** A constant with another width and signedness, extended by its own sign if it is signed. */
export function converted(constant: Constant, width: number, signed: boolean): Constant {
  const extend = (bits: bigint): bigint =>
    BigInt.asUintN(width, constant.signed ? BigInt.asIntN(constant.width, bits) : bits);
  return { width, signed, value: extend(constant.value), unknown: extend(constant.unknown) };
}

/** A signed constant of 32 bits, as an `integer` holds it. */
export const integerConstant = (value: number): Constant => ({
  width: 32,
  signed: true,
  value: BigInt.asUintN(32, BigInt(value)),
  unknown: 0n,
});

/** The number that a constant stands for; undefined if a bit of it is x or it is too large. */
export function numberOf({ width, signed, value, unknown }: Constant): number | undefined {
  if (unknown !== 0n) return undefined;
  const number = Number(signed ? BigInt.asIntN(width, value) : value);
  return Number.isSafeInteger(number) ? number : undefined;
}

/** Whether a constant is true: some bit is 1, or it is a real number other than 0. */
export const isTrue = ({ value, unknown, real }: Constant): boolean =>
  real === undefined ? (value & ~unknown) !== 0n : real !== 0;

/** The indices of a range, or undefined after a report: of more than `most` elements, say. */
export function evaluateRange(
  range: RangeSyntax,
  scope: BlockScope,
  most = MAX_WIDTH,
): Range | undefined {
  const left = evaluateConstant(range.left, scope);
  const right = evaluateConstant(range.right, scope);
  if (left === undefined || right === undefined) return undefined;
  const msb = numberOf(left);
  const lsb = numberOf(right);
  const { shared } = scope;
  if (msb === undefined || lsb === undefined || !isInt32(msb) || !isInt32(lsb)) {
    const message = 'the ends of a range are whole numbers without x, of 32 bits at most';
    shared.report('range-invalid', message, range.start, range.end);
    return undefined;
  }
  if (Math.abs(msb - lsb) >= most) {
    const width = Math.abs(msb - lsb) + 1;
    const message = `the range has ${width} elements; at most ${most} are possible`;
    shared.report('range-invalid', message, range.start, range.end);
    return undefined;
  }
  return { msb, lsb };
}

const isInt32 = (value: number): boolean => (value | 0) === value;
