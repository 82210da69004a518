import { type Logic, LogicOp } from '../../logic/logic.js';
import { writeLiterals } from '../../logic/writes.js';

/** Who reads each node of a graph: other nodes, the next state of bits, and outputs. */
export interface Readers {
  /** Readers of node n stand from `start[n]` up to `start[n + 1]`. */
  readonly start: Uint32Array;
  /**
   * A node that reads it; or `nodeCount` + a state bit whose next value it is; or `nodeCount` + the
   * number of state bits for an output, a fault or a write.
   */
  readonly reader: Uint32Array;
}

/** Lists the readers of all nodes. */
export function readersOf(logic: Logic): Readers {
  const start = new Uint32Array(logic.nodeCount + 1);
  eachRead(logic, (node) => start[node + 1]!++);
  for (let node = 0; node < logic.nodeCount; node++) start[node + 1]! += start[node]!;
  const reader = new Uint32Array(start[logic.nodeCount]!);
  const next = start.slice();
  eachRead(logic, (node, by) => {
    reader[next[node]!++] = by;
  });
  return { start, reader };
}

function eachRead(logic: Logic, read: (node: number, reader: number) => void): void {
  const { op, a, b, c, nodeCount } = logic;
  for (let node = 1; node < nodeCount; node++) {
    if (op[node]! < LogicOp.And) continue;
    read(a[node]! >>> 1, node);
    read(b[node]! >>> 1, node);
    if (op[node] === LogicOp.Mux) read(c[node]! >>> 1, node);
  }
  for (const [bit, literal] of logic.next.entries()) read(literal >>> 1, nodeCount + bit);
  const outside = nodeCount + logic.states.length;
  for (const literal of logic.outputs) read(literal >>> 1, outside);
  for (const { when } of logic.faults) read(when >>> 1, outside);
  for (const write of logic.writes) {
    for (const literal of writeLiterals(write)) read(literal >>> 1, outside);
  }
}
