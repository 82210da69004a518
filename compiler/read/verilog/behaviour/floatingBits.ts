import type { NetId } from '../../../circuit/ids.js';
import type { FloatingBit } from '../scope.js';
import type { Logic } from './logic.js';

/** The nets of a value of which some bits may be z, least significant bit first. */
export type FloatingBits = readonly FloatingBit[];

/** One bit out of two: `whenOne` where `condition` is 1. What is z leaves its data to the other. */
export function chosenBit(
  condition: NetId,
  whenZero: FloatingBit,
  whenOne: FloatingBit,
  logic: Logic,
): FloatingBit {
  const isZ = ({ enable }: FloatingBit): boolean => logic.valueOf(enable) === 0;
  const enable = logic.mux(condition, whenZero.enable, whenOne.enable);
  if (isZ(whenOne)) return { data: whenZero.data, enable };
  if (isZ(whenZero)) return { data: whenOne.data, enable };
  return { data: logic.mux(condition, whenZero.data, whenOne.data), enable };
}

/** What a bit is where an operator reads it: x while it is z (IEEE 1364-2005, clause 5.1). */
export function operandOf({ data, enable }: FloatingBit, logic: Logic): NetId {
  return logic.mux(enable, logic.unknown, data);
}

/** Cuts bits to a width, or extends them by zeros or the sign. */
export function resizeFloating(
  bits: FloatingBits,
  width: number,
  signed: boolean,
  logic: Logic,
): FloatingBits {
  if (bits.length >= width) return bits.slice(0, width);
  const sign = signed ? bits[bits.length - 1] : undefined;
  const fill = sign ?? { data: logic.zero, enable: logic.one };
  return [...bits, ...new Array<FloatingBit>(width - bits.length).fill(fill)];
}
