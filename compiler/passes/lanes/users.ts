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

/** The nodes that read each node, all in one array. */
export class Users {
  /** Per node, its first place in `user`; and where the last node's end. */
  readonly start: Uint32Array;
  readonly user: Uint32Array;

  constructor(logic: Logic) {
    const { nodeCount } = logic;
    this.start = new Uint32Array(nodeCount + 1);
    for (let node = 1; node < nodeCount; node++) {
      eachOperand(logic, node, (operand) => {
        this.start[operand + 1]!++;
      });
    }
    for (let node = 0; node < nodeCount; node++) this.start[node + 1]! += this.start[node]!;
    this.user = new Uint32Array(this.start[nodeCount]!);
    const next = this.start.slice();
    for (let node = 1; node < nodeCount; node++) {
      eachOperand(logic, node, (operand) => {
        this.user[next[operand]!] = node;
        next[operand]!++;
      });
    }
  }
}
