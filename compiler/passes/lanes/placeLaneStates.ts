import { type Logic, LogicOp } from '../../logic/logic.js';

/**
 * The order in which state bits are to stand: the one in which their next values are stored when the
 * operations of `order` are carried out, so that stores run through memory from front to back.
 *
 * A next value that is made is stored as soon as it is; one that only moves (a state or an input),
 * when the first operation reads it; what is left comes last. Lists the old bit of each new place.
 */
export function placeLaneStates(logic: Logic, order: Uint32Array): Uint32Array {
  const madeAt = new Float64Array(logic.nodeCount).fill(Infinity);
  const readAt = new Float64Array(logic.nodeCount).fill(Infinity);
  for (const [at, node] of order.entries()) {
    madeAt[node] = at;
    const operands = [logic.a[node]!, logic.b[node]!];
    if (logic.op[node] === LogicOp.Mux) operands.push(logic.c[node]!);
    for (const operand of operands) {
      readAt[operand >>> 1] = Math.min(readAt[operand >>> 1]!, at);
    }
  }
  const storedAt = Float64Array.from(logic.next, (literal) => {
    const node = literal >>> 1;
    return logic.op[node]! < LogicOp.And ? readAt[node]! : madeAt[node]!;
  });
  const bits = Uint32Array.from(storedAt.keys());
  return bits.sort((p, q) => compare(storedAt[p]!, storedAt[q]!) || p - q);
}

// Both may be infinite, so that their difference is no number.
const compare = (p: number, q: number): number => (p < q ? -1 : p > q ? 1 : 0);

/** The logic with its state bits moved: `placement` lists the old bit of each new place. */
export function moveStates(logic: Logic, placement: Uint32Array): Logic {
  const placeOf = new Uint32Array(placement.length);
  for (const [place, bit] of placement.entries()) placeOf[bit] = place;
  return {
    ...logic,
    a: logic.a.map((a, node) => (logic.op[node] === LogicOp.State ? placeOf[a]! : a)),
    states: Array.from(placement, (bit) => logic.states[bit]!),
    next: Array.from(placement, (bit) => logic.next[bit]!),
  };
}
