import type { NetId } from '../../../circuit/ids.js';
import { X } from '../../../circuit/values.js';
import type { Bits, Logic } from './logic.js';

/** A value whose bits are all constants; bits set in `unknown` are x and 0 in `value`. */
export interface Known {
  readonly value: bigint;
  readonly unknown: bigint;
}

/** The value of bits that constants drive, undefined if any other net is among them. */
export function knownOf(bits: Bits, logic: Logic): Known | undefined {
  let value = 0n;
  let unknown = 0n;
  // Words of 32 bits first: loops are counted with such values, so this must be quick.
  for (let end = bits.length; end > 0; ) {
    const start = (end - 1) & ~31;
    let ones = 0;
    let unknowns = 0;
    for (let i = end - 1; i >= start; i--) {
      const bit = logic.valueOf(bits[i]!);
      if (bit === undefined) return undefined;
      ones = (ones << 1) | (bit & 1);
      unknowns = (unknowns << 1) | (bit >> 1);
    }
    value = (value << 32n) | BigInt(ones >>> 0);
    unknown = (unknown << 32n) | BigInt(unknowns >>> 0);
    end = start;
  }
  return { value, unknown };
}

/** The lowest `width` bits of a value as nets. */
export function bitsOf(known: Known, width: number, logic: Logic): Bits {
  const nets: NetId[] = [];
  for (let start = 0; start < width; start += 32) {
    const ones = Number(BigInt.asUintN(32, known.value >> BigInt(start)));
    const unknowns = Number(BigInt.asUintN(32, known.unknown >> BigInt(start)));
    for (let i = 0; i < 32 && start + i < width; i++) {
      const bit = (unknowns >>> i) & 1 ? X : (((ones >>> i) & 1) as 0 | 1);
      nets.push(logic.constant(bit));
    }
  }
  return nets;
}

/** All bits x. */
export function unknownBits(width: number, logic: Logic): Bits {
  return new Array(width).fill(logic.unknown);
}

/** Whether a constant x is among the bits: arithmetic on it is x in all bits (clause 5.1.5). */
export function hasUnknown(bits: Bits, logic: Logic): boolean {
  return bits.some((net) => logic.valueOf(net) === X);
}

/** Cuts bits to a width, or extends them by zeros or the sign. */
export function resize(bits: Bits, width: number, signed: boolean, logic: Logic): Bits {
  if (bits.length === width) return bits;
  if (bits.length > width) return bits.slice(0, width);
  const sign = bits[bits.length - 1];
  const fill = signed && sign !== undefined ? sign : logic.zero;
  return [...bits, ...new Array(width - bits.length).fill(fill)];
}

/** Two's complement reading of a value of some width. */
export function signedValue(value: bigint, width: number): bigint {
  return BigInt.asIntN(width, value);
}
