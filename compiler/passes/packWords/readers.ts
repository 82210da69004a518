import { Lists } from '../../circuit/lists.js';
import { LogicOp, nodeOf } from '../../logic/logic.js';
import { writeLiterals } from '../../logic/writes.js';
import { type Packs, SUM } from './packs.js';

/**
 * Lists the readers of all nodes: a node that reads it; or `nodeCount` + a state bit whose next value
 * it is; or `nodeCount` + the number of state bits for an output, a fault or a write.
 *
 * What is added is read by the lowest bit of the sum, and by no node that an addition makes
 * superfluous.
 */
export const readersOf = (packs: Packs): Lists =>
  new Lists(packs.logic.nodeCount, (read) => eachRead(packs, read));

function eachRead(packs: Packs, read: (node: number, reader: number) => void): void {
  const { logic, isDead } = packs;
  const { op, a, b, c, nodeCount } = logic;
  for (let node = 1; node < nodeCount; node++) {
    if (op[node]! < LogicOp.And || isDead[node] === 1) continue;
    if (packs.get(packs.packOf[node]!)?.op === SUM) continue;
    read(a[node]! >>> 1, node);
    read(b[node]! >>> 1, node);
    if (op[node] === LogicOp.Mux) read(c[node]! >>> 1, node);
  }
  for (const { words, sum } of packs.additions) {
    const by = nodeOf(sum.find((literal) => literal >= 0)!);
    if (!packs.isPacked(by)) continue;
    for (const literal of words.flat()) read(nodeOf(literal), by);
  }
  for (const [bit, literal] of logic.next.entries()) read(literal >>> 1, nodeCount + bit);
  const outside = nodeCount + logic.states.length;
  for (const literal of logic.outputs) read(literal >>> 1, outside);
  for (const { when } of logic.faults) read(when >>> 1, outside);
  for (const write of logic.writes) {
    for (const literal of writeLiterals(write)) read(literal >>> 1, outside);
  }
}
