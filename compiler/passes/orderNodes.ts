import { type Logic, LogicOp } from '../logic/logic.js';

/**
 * Lists the operation nodes of a logic graph in the order to compute them: the cone of one sink
 * (an output or a next state) depth first, then what the next sink adds.
 *
 * Cones keep values near their use; in measurements they ran up to twice as fast as level order.
 */
export function orderNodes(logic: Logic, sinks: readonly number[]): Uint32Array {
  const placed = new Uint8Array(logic.nodeCount);
  const order: number[] = [];
  const stack: number[] = [];
  for (const sink of sinks) {
    stack.push(sink >>> 1);
    while (stack.length > 0) {
      const node = stack[stack.length - 1]!;
      if (placed[node] === 1 || logic.op[node]! < LogicOp.And) {
        stack.pop();
        continue;
      }
      const before = stack.length;
      if (logic.op[node] === LogicOp.Mux) pushUnplaced(logic, placed, stack, logic.c[node]!);
      pushUnplaced(logic, placed, stack, logic.b[node]!);
      pushUnplaced(logic, placed, stack, logic.a[node]!);
      if (stack.length > before) continue;
      stack.pop();
      placed[node] = 1;
      order.push(node);
    }
  }
  return Uint32Array.from(order);
}

function pushUnplaced(logic: Logic, placed: Uint8Array, stack: number[], literal: number): void {
  const node = literal >>> 1;
  if (placed[node] === 0 && logic.op[node]! >= LogicOp.And) stack.push(node);
}
