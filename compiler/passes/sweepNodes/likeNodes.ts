import { type Logic, LogicOp } from '../../logic/logic.js';
import { randomWords, Signatures, simulate } from '../../logic/simulate.js';

/** Rounds of 32 random trials, and node values computed in all of them at most. */
const ROUNDS = 64;
const BUDGET = 40_000_000;
const FEWEST_ROUNDS = 8;

/** Nodes that may be equal to others. */
export interface LikeNodes {
  /** Per node a literal of an earlier node that has been the same in all trials, or -1. */
  readonly likeness: Int32Array;
  readonly count: number;
}

/**
 * Finds operations that have been equal, or opposite, to an earlier node, or constant, in a
 * simulation of random values of inputs and state bits.
 */
export function likeNodes(logic: Logic): LikeNodes {
  const { op, nodeCount } = logic;
  const rounds = Math.min(ROUNDS, Math.max(FEWEST_ROUNDS, Math.floor(BUDGET / nodeCount)));
  const random = randomWords();
  // Evenly, and at times mostly 0 or mostly 1: what depends on many bits shows itself sooner.
  const draws = [random, random, () => random() & random(), () => random() | random()];
  const value = new Int32Array(nodeCount);
  const phase = new Uint8Array(nodeCount);
  const signatures = new Signatures(nodeCount);
  for (let round = 0; round < rounds; round++) {
    simulate(logic, value, draws[round % draws.length]!);
    if (round === 0) for (let node = 0; node < nodeCount; node++) phase[node] = value[node]! & 1;
    for (let node = 0; node < nodeCount; node++) signatures.add(node, value[node]! ^ -phase[node]!);
  }
  const first = new Map<number, number>();
  const likeness = new Int32Array(nodeCount).fill(-1);
  let count = 0;
  for (const [node, signature] of signatures.take().entries()) {
    const earlier = first.get(signature);
    if (earlier === undefined) first.set(signature, node);
    else if (op[node]! >= LogicOp.And && op[node]! <= LogicOp.Mux) {
      likeness[node] = earlier * 2 + (phase[earlier]! ^ phase[node]!);
      count++;
    }
  }
  return { likeness, count };
}
