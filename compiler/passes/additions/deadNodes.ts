import { type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { sinksOf } from '../../logic/sinks.js';
import type { Addition } from './addition.js';

/** Per node, 1 if nothing needs it once the bits of the sums are made by additions. */
export function deadNodes(logic: Logic, additions: readonly Addition[]): Uint8Array {
  const ofNode = new Map<number, Addition>();
  for (const addition of additions) {
    for (const literal of addition.sum) if (literal >= 0) ofNode.set(nodeOf(literal), addition);
  }
  const dead = new Uint8Array(logic.nodeCount).fill(1);
  const { op, a, b, c } = logic;
  const stack = sinksOf(logic).map(nodeOf);
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    if (dead[node] === 0) continue;
    dead[node] = 0;
    const addition = ofNode.get(node);
    if (addition !== undefined) {
      for (const literal of addition.words.flat()) stack.push(nodeOf(literal));
    } else if (op[node]! >= LogicOp.And) {
      stack.push(a[node]! >>> 1, b[node]! >>> 1);
      if (op[node] === LogicOp.Mux) stack.push(c[node]! >>> 1);
    }
  }
  return dead;
}
