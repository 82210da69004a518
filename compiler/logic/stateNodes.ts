import { type Logic, LogicOp } from './logic.js';

/** Per state bit its node, or -1 where nothing reads it. */
export function stateNodes({ op, a, nodeCount, states }: Logic): Int32Array {
  const nodes = new Int32Array(states.length).fill(-1);
  for (let node = 1; node < nodeCount; node++) {
    if (op[node] === LogicOp.State) nodes[a[node]!] = node;
  }
  return nodes;
}
