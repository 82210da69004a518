import type { NetId } from '../../../circuit/ids.js';
import type { Bits, Logic } from './logic.js';

/** Whether two values of one width are equal. */
export function equal(a: Bits, b: Bits, logic: Logic): NetId {
  return logic.and(...a.map((net, i) => logic.xnor(net, b[i]!)));
}

/** Whether a < b, both of one width. */
export function less(a: Bits, b: Bits, signed: boolean, logic: Logic): NetId {
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
  return logic.or(...bits);
}
