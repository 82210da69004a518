import { type Logic, LogicOp } from '../logic/logic.js';

/**
 * Most nodes of a block. Functions of 300 to 2,000 operations run equally fast; beyond some 6,000 the
 * optimizing tier of a WebAssembly engine may fall back to a weaker register allocator.
 */
const MOST = 1200;
/** The part of them that a block has at least. */
const LEAST_PART = 5 / 12;

/**
 * Cuts an order of nodes into blocks, each to become one function: `most` nodes or at least
 * `LEAST_PART` of these, at the place that the fewest values cross, since each of these passes
 * through memory.
 *
 * Returns the places in `order` at which blocks start, the first being 0.
 */
export function cutBlocks(logic: Logic, order: Uint32Array, most = MOST): number[] {
  const least = Math.ceil(most * LEAST_PART);
  const crossing = crossingValues(logic, order);
  const starts = [0];
  for (let start = 0; start + most < order.length; ) {
    let best = start + least;
    for (let place = best; place <= start + most; place++) {
      if (crossing[place]! <= crossing[best]!) best = place;
    }
    starts.push(best);
    start = best;
  }
  return starts;
}

// Per place in the order: values made before it that are read from it on.
function crossingValues(logic: Logic, order: Uint32Array): Int32Array {
  const place = new Int32Array(logic.nodeCount).fill(-1);
  const lastRead = new Int32Array(logic.nodeCount).fill(-1);
  for (const [at, node] of order.entries()) {
    place[node] = at;
    lastRead[logic.a[node]! >>> 1] = at;
    lastRead[logic.b[node]! >>> 1] = at;
    if (logic.op[node] === LogicOp.Mux) lastRead[logic.c[node]! >>> 1] = at;
  }
  const change = new Int32Array(order.length + 2);
  for (const node of order) {
    const from = place[node]!;
    const to = lastRead[node]!;
    if (to <= from) continue;
    change[from + 1]!++;
    change[to + 1]!--;
  }
  for (let at = 1; at < change.length; at++) change[at]! += change[at - 1]!;
  return change;
}
