import type { NetId } from '../../../circuit/ids.js';
import { hasUnknown, unknownBits } from './bits.js';
import type { Bits, Logic } from './logic.js';

/** Shifts by a value; what moves in is `fill`. `amount` is unsigned (clause 5.1.12). */
export function shift(
  bits: Bits,
  amount: Bits,
  direction: 'left' | 'right',
  fill: NetId,
  logic: Logic,
): Bits {
  if (hasUnknown(amount, logic)) return unknownBits(bits.length, logic);
  let result = bits;
  const tooFar: NetId[] = [];
  amount.forEach((select, i) => {
    const distance = 2 ** i;
    if (distance >= bits.length) tooFar.push(select);
    else if (logic.valueOf(select) !== 0) {
      const moved = move(result, distance, direction, fill);
      result = result.map((net, k) => logic.mux(select, net, moved[k]!));
    }
  });
  const gone = logic.any(tooFar);
  return result.map((net) => logic.mux(gone, net, fill));
}

function move(bits: Bits, distance: number, direction: 'left' | 'right', fill: NetId): Bits {
  return bits.map((_, i) => bits[direction === 'left' ? i - distance : i + distance] ?? fill);
}
