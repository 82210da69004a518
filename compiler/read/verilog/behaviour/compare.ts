import type { NetId } from '../../../circuit/ids.js';
import { knownOf, signedValue } from './bits.js';
import type { Bits, Logic } from './logic.js';

/** Whether two values of one width are equal. */
export function equal(a: Bits, b: Bits, logic: Logic): NetId {
  return logic.all(a.map((net, i) => logic.xnor(net, b[i]!)));
}

/** Whether a < b, both of one width. */
export function less(a: Bits, b: Bits, signed: boolean, logic: Logic): NetId {
  const known = lessKnown(a, b, signed, logic);
  if (known !== undefined) return logic.constant(known ? 1 : 0);
  let result = logic.zero;
  for (let i = 0; i < a.length; i++) {
    // Where the bits differ, b's bit decides; a's at the sign, which weighs negatively.
    const decides = signed && i === a.length - 1 ? a[i]! : b[i]!;
    result = logic.mux(logic.xor(a[i]!, b[i]!), result, decides);
  }
  return result;
}

/** Whether any bit is 1: the truth value of a vector (clause 5.1.9). */
export function isTrue(bits: Bits, logic: Logic): NetId {
  return logic.any(bits);
}

// Loops are counted with constants, so this must be quick.
function lessKnown(a: Bits, b: Bits, signed: boolean, logic: Logic): boolean | undefined {
  const left = knownOf(a, logic);
  const right = left?.unknown === 0n ? knownOf(b, logic) : undefined;
  if (left === undefined || right?.unknown !== 0n) return undefined;
  if (!signed) return left.value < right.value;
  return signedValue(left.value, a.length) < signedValue(right.value, b.length);
}
