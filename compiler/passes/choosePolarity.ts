import { type Logic, LogicOp, TRUE, UPDATE_WIDTH } from '../logic/logic.js';
import { PolarityEdges } from './polarityEdges.js';

/** Most nodes that one trial may turn over; wide exclusive-or networks would cost more than they gain. */
const CASCADE_LIMIT = 64;
/** Trials for each circuit; large ones are not swept until nothing more is gained. */
const TRIALS = 400_000;
const SWEEPS = 16;

/**
 * Chooses for each node whether its value or the inverse is kept, so that few inversions remain: an
 * and-node kept inverted is an or of its inverted operands (De Morgan).
 *
 * Exclusive-ors and multiplexers take the polarity that falls out of their operands; and-nodes and
 * state bits are free. A local search turns over one at a time, with all that follows from it, and
 * keeps what lowers the number of nodes that are needed inverted. Returns 1 per inverted node. With
 * `keepsStates` no state bit is inverted, since other graphs share them.
 */
export function choosePolarity(logic: Logic, keepsStates = false): Uint8Array {
  const edges = new PolarityEdges(logic);
  const fixed = keepsStates ? new Uint8Array(logic.states.length).fill(1) : gatedStates(logic);
  const sweeps = Math.min(SWEEPS, Math.max(2, Math.floor(TRIALS / logic.nodeCount)));
  for (let sweep = 0; sweep < sweeps; sweep++) {
    let gained = false;
    for (let node = 1; node < logic.nodeCount; node++) {
      const op = logic.op[node]!;
      if (op !== LogicOp.And && (op !== LogicOp.State || fixed[logic.a[node]!] === 1)) continue;
      const turned = cascade(edges, node);
      if (turned === undefined) continue;
      const before = edges.cost;
      for (const each of turned) edges.turn(each);
      if (edges.cost < before) gained = true;
      else for (const each of turned) edges.turn(each);
    }
    if (!gained) break;
  }
  return edges.inverted;
}

// A gate makes 0 of what is kept: it needs its state bits as they are.
function gatedStates(logic: Logic): Uint8Array {
  const gated = new Uint8Array(logic.states.length);
  for (const { first, gate } of logic.updates) {
    if (gate !== TRUE) gated.fill(1, first, first + UPDATE_WIDTH);
  }
  return gated;
}

// The node and every node whose polarity follows from it, each once; undefined if too many.
function cascade(edges: PolarityEdges, node: number): number[] | undefined {
  const turned = [node];
  if (edges.followersOf(node).length === 0) return turned;
  const parity = new Map<number, number>();
  const waiting: number[] = [];
  for (let current: number | undefined = node; current !== undefined; ) {
    for (const user of edges.followersOf(current)) {
      if (!parity.has(user)) waiting.push(user);
      parity.set(user, (parity.get(user) ?? 0) ^ 1);
    }
    if (waiting.length + turned.length > CASCADE_LIMIT) return undefined;
    // Lowest number first: all operands of a node have been decided before the node.
    waiting.sort((p, q) => q - p);
    do current = waiting.pop();
    while (current !== undefined && parity.get(current) === 0);
    if (current !== undefined) turned.push(current);
  }
  return turned;
}
