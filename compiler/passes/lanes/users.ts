import { Lists } from '../../circuit/lists.js';
import { type Logic, LogicOp } from '../../logic/logic.js';

/** Calls `visit` with each node that a node reads; never for what is no operation. */
export function eachOperand(
  { op, a, b, c }: Logic,
  node: number,
  visit: (operand: number) => void,
): void {
  if (op[node]! < LogicOp.And) return;
  visit(a[node]! >>> 1);
  visit(b[node]! >>> 1);
  if (op[node] === LogicOp.Mux) visit(c[node]! >>> 1);
}

/** The nodes that read each node. */
export const usersOf = (logic: Logic): Lists =>
  new Lists(logic.nodeCount, (add) => {
    for (let node = 1; node < logic.nodeCount; node++) {
      eachOperand(logic, node, (operand) => add(operand, node));
    }
  });
