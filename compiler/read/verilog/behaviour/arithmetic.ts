import type { NetId } from '../../../circuit/ids.js';
import { resize } from './bits.js';
import type { Bits, Logic } from './logic.js';

/** a + b + carry in the width of `a`, by a ripple of full adders. */
export function add(a: Bits, b: Bits, carry: NetId, logic: Logic): Bits {
  const sum: NetId[] = [];
  let c = carry;
  for (let i = 0; i < a.length; i++) {
    sum.push(sumOf(a[i]!, b[i]!, c, logic));
    if (i + 1 < a.length) c = carryOf(a[i]!, b[i]!, c, logic);
  }
  return sum;
}

/** a - b in the width of `a`. */
export function subtract(a: Bits, b: Bits, logic: Logic): Bits {
  return add(a, invert(b, logic), logic.one, logic);
}

/** -a. */
export function negate(a: Bits, logic: Logic): Bits {
  return add(invert(a, logic), new Array(a.length).fill(logic.zero), logic.one, logic);
}

/** Each bit inverted. */
export function invert(a: Bits, logic: Logic): Bits {
  return a.map((net) => logic.not(net));
}

/** a * b in the width of `a`: one row of adders for each bit of `b` that is not 0. */
export function multiply(a: Bits, b: Bits, logic: Logic): Bits {
  const zeros = (bits: Bits): number => bits.filter((net) => logic.valueOf(net) === 0).length;
  const [rows, row] = zeros(b) >= zeros(a) ? [b, a] : [a, b];
  let sum: Bits = new Array(row.length).fill(logic.zero);
  rows.forEach((factor, shift) => {
    if (logic.valueOf(factor) === 0) return;
    const product = row.slice(0, row.length - shift).map((net) => logic.and(net, factor));
    const upper = add(sum.slice(shift), product, logic.zero, logic);
    sum = [...sum.slice(0, shift), ...upper];
  });
  return sum;
}

/** Two's complement magnitude and sign of a value. */
function magnitude(a: Bits, signed: boolean, logic: Logic): { bits: Bits; sign: NetId } {
  const sign = signed ? a[a.length - 1]! : logic.zero;
  if (logic.valueOf(sign) === 0) return { bits: a, sign };
  return { bits: negateIf(sign, a, logic), sign };
}

/** -a where `condition` is 1, else a. */
function negateIf(condition: NetId, a: Bits, logic: Logic): Bits {
  const flipped = a.map((net) => logic.xor(net, condition));
  return add(flipped, new Array(a.length).fill(logic.zero), condition, logic);
}

/**
 * Quotient and remainder of two values of one width, by restoring division.
 *
 * Signed division truncates toward zero and the remainder has the sign of `a` (clause 5.1.5).
 * Division by zero gives x.
 */
export function divide(
  a: Bits,
  b: Bits,
  signed: boolean,
  logic: Logic,
): { quotient: Bits; remainder: Bits } {
  const dividend = magnitude(a, signed, logic);
  const divisor = magnitude(b, signed, logic);
  const { quotient, remainder } = divideUnsigned(dividend.bits, divisor.bits, logic);
  const byZero = logic.not(logic.any(b));
  const orUnknown = (net: NetId): NetId => logic.mux(byZero, net, logic.unknown);
  const sign = logic.xor(dividend.sign, divisor.sign);
  return {
    quotient: negateIf(sign, quotient, logic).map(orUnknown),
    remainder: negateIf(dividend.sign, remainder, logic).map(orUnknown),
  };
}

/** Quotient and remainder of a division by 2^exponent: wiring, and a rounding adder if signed. */
export function divideByPower(
  a: Bits,
  exponent: number,
  signed: boolean,
  logic: Logic,
): { quotient: Bits; remainder: Bits } {
  const sign = signed ? a[a.length - 1]! : logic.zero;
  // A negative dividend is rounded up, toward zero, by adding 2^exponent - 1 before the cut.
  const bias = a.map((_, i) => (i < exponent ? sign : logic.zero));
  const rounded = add(a, bias, logic.zero, logic);
  // The sign after rounding: -1 / 4 is 0.
  const quotient = resize(rounded.slice(exponent), a.length, signed, logic);
  const product = quotient.map((_, i) => (i < exponent ? logic.zero : quotient[i - exponent]!));
  const remainder = signed
    ? subtract(a, product, logic)
    : a.map((net, i) => (i < exponent ? net : logic.zero));
  return { quotient, remainder };
}

function divideUnsigned(a: Bits, b: Bits, logic: Logic): { quotient: Bits; remainder: Bits } {
  const width = a.length;
  const inverted = invert(resize(b, width + 1, false, logic), logic);
  const quotient: NetId[] = new Array(width);
  let rest: Bits = new Array(width).fill(logic.zero);
  for (let i = width - 1; i >= 0; i--) {
    const shifted = [a[i]!, ...rest];
    const difference = add(shifted, inverted, logic.one, logic);
    const borrow = difference[width]!;
    quotient[i] = logic.not(borrow);
    rest = shifted.slice(0, width).map((net, k) => logic.mux(borrow, difference[k]!, net));
  }
  return { quotient, remainder: rest };
}

// Two gates of which the carry shares the first; one where a constant is among the three.
function sumOf(a: NetId, b: NetId, c: NetId, logic: Logic): NetId {
  const constant = [a, b, c].some((net) => logic.valueOf(net) !== undefined);
  return constant ? logic.xor(a, b, c) : logic.xor(logic.xor(a, b), c);
}

// With a constant among the three, the majority is a single gate.
function carryOf(a: NetId, b: NetId, c: NetId, logic: Logic): NetId {
  const triples = [
    [a, b, c],
    [b, a, c],
    [c, a, b],
  ] as const;
  for (const [x, y, z] of triples) {
    const value = logic.valueOf(x);
    if (value === 0) return logic.and(y, z);
    if (value === 1) return logic.or(y, z);
  }
  return logic.or(logic.and(a, b), logic.and(c, logic.xor(a, b)));
}
