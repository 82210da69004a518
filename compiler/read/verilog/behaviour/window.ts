import type { NetId } from '../../../circuit/ids.js';
import { hasUnknown } from './bits.js';
import type { Bits, Logic } from './logic.js';

/** An index that is not constant, cut to the bits that matter for `low … high`. */
interface Index {
  readonly bits: Bits;
  readonly signed: boolean;
  /** 1 where the index is beyond what `bits` can hold, so surely outside of `low … high`. */
  readonly beyond: NetId;
  readonly low: number;
  readonly high: number;
}

/** Cuts an index to the bits that tell the values `low … high` apart. */
export function indexOf(
  bits: Bits,
  signed: boolean,
  low: number,
  high: number,
  logic: Logic,
): Index {
  const needed = signed
    ? 1 + Math.max(bitLength(Math.max(high, 0)), bitLength(Math.max(-low - 1, 0)))
    : bitLength(Math.max(high, 0));
  if (needed >= bits.length) return { bits, signed, beyond: logic.zero, low, high };
  const cut = bits.slice(0, needed);
  const rest = bits.slice(needed);
  const sign = signed ? cut[needed - 1]! : logic.zero;
  const beyond = logic.any(rest.map((net) => logic.xor(net, sign)));
  return { bits: cut, signed, beyond, low, high };
}

function bitLength(value: number): number {
  return value === 0 ? 0 : Math.floor(Math.log2(value)) + 1;
}

/** Whether the index has the value `i`. */
export function indexIs(index: Index, i: number, logic: Logic): NetId {
  const { bits, signed, beyond } = index;
  const lowest = signed ? -(2 ** (bits.length - 1)) : 0;
  const highest = signed ? 2 ** (bits.length - 1) - 1 : 2 ** bits.length - 1;
  if (i < lowest || i > highest) return logic.zero;
  const wanted = BigInt.asUintN(bits.length, BigInt(i));
  const literals = bits.map((net, k) => ((wanted >> BigInt(k)) & 1n ? net : logic.not(net)));
  return logic.and(logic.not(beyond), ...literals);
}

/**
 * Reads `width` neighbouring bits: result bit j is `leaf(i + j)` where i is the index's value.
 *
 * A barrel of multiplexers, for one bit a multiplexer tree. Where the index is outside of
 * `low … high` the result is `outside`, x unless given (clause 5.2.1); `leaf` gives that itself for
 * single bits outside.
 */
export function readWindow(
  index: Index,
  width: number,
  leaf: (i: number) => NetId,
  logic: Logic,
  outside = logic.unknown,
): Bits {
  const { bits, signed, beyond } = index;
  if (hasUnknown([...bits, beyond], logic)) return new Array<NetId>(width).fill(outside);
  // Before bit b is decided, the lower bits can still move the window by less than 2^(b+1).
  const lowest = signed && bits.length > 0 ? -(2 ** (bits.length - 1)) : 0;
  const span = width + 2 ** bits.length - 1;
  let values = Array.from({ length: span }, (_, k) => leaf(lowest + k));
  for (let b = bits.length - 1; b >= 0; b--) {
    const weight = 2 ** b;
    // The sign bit counts down: where it is 0 the window moves up by the weight.
    const isSign = signed && b === bits.length - 1;
    const select = isSign ? logic.not(bits[b]!) : bits[b]!;
    values = Array.from({ length: width + weight - 1 }, (_, k) =>
      logic.mux(select, values[k]!, values[k + weight]!),
    );
  }
  return values.map((net) => logic.mux(beyond, net, outside));
}
