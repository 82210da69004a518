import { type Logic, LogicOp, TRUE, UPDATE_WIDTH } from '../logic/logic.js';
import { PolarityEdges } from './polarityEdges.js';

/** Most nodes that one move may turn over; wide exclusive-or networks cost more than they gain. */
const CASCADE_LIMIT = 64;
/** Node turns spent on one circuit: some tenths of a second. */
const BUDGET = 2_000_000;
const MOST_SWEEPS = 200;
/** Sweeps of plain descent, before and after the others. */
const DESCENT = 12;
/** At first a move that costs one inversion is kept in about half of the cases. */
const HOTTEST = 1.2;

/**
 * Chooses for each node whether its value or the inverse is kept, so that few inversions remain: an
 * and-node kept inverted is an or of its inverted operands (De Morgan).
 *
 * Exclusive-ors and multiplexers take the polarity that falls out of their operands; and-nodes and
 * state bits are free. A move turns over one of these with all that follows from it. Simulated
 * annealing (S. Kirkpatrick, C. Gelatt, M. Vecchi, "Optimization by simulated annealing", Science
 * 220, 1983) keeps moves that lower the number of nodes needed inverted, and at first some others.
 * Returns 1 per inverted node. State bits in `kept` are not inverted; `true` stands for all of them.
 */
export function choosePolarity(logic: Logic, kept: boolean | Uint8Array = false): Uint8Array {
  const edges = new PolarityEdges(logic);
  const moves = movesOf(logic, edges, kept);
  descend(edges, moves);
  const descended = { cost: edges.cost, inverted: edges.inverted.slice() };
  const turns = moves.reduce((sum, move) => sum + move.length, 1);
  const sweeps = Math.min(MOST_SWEEPS, Math.floor(BUDGET / turns));
  if (sweeps <= DESCENT) return descended.inverted;
  anneal(edges, moves, sweeps);
  descend(edges, moves);
  return edges.cost < descended.cost ? edges.inverted : descended.inverted;
}

/** Nodes that turn over together. */
type Move = readonly number[];

function movesOf(logic: Logic, edges: PolarityEdges, kept: boolean | Uint8Array): Move[] {
  const fixed = kept === true ? new Uint8Array(logic.states.length).fill(1) : gatedStates(logic);
  if (typeof kept === 'object') for (const [bit, flag] of kept.entries()) fixed[bit]! |= flag;
  const moves: Move[] = [];
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op[node]!;
    if (op !== LogicOp.And && (op !== LogicOp.State || fixed[logic.a[node]!] === 1)) continue;
    const move = cascade(edges, node);
    if (move !== undefined) moves.push(move);
  }
  return moves;
}

// A gate makes 0 of what is kept: it needs its state bits as they are.
function gatedStates(logic: Logic): Uint8Array {
  const gated = new Uint8Array(logic.states.length);
  for (const { first, gate } of logic.updates) {
    if (gate !== TRUE) gated.fill(1, first, first + UPDATE_WIDTH);
  }
  return gated;
}

function descend(edges: PolarityEdges, moves: readonly Move[]): void {
  for (let sweep = 0, gained = true; gained && sweep < DESCENT; sweep++) {
    gained = false;
    for (const move of moves) if (attempt(edges, move, 0)) gained = true;
  }
}

function anneal(edges: PolarityEdges, moves: readonly Move[], sweeps: number): void {
  // Numerical Recipes' linear congruential generator: equal circuits give equal code.
  let random = 1;
  for (let sweep = 0; sweep < sweeps; sweep++) {
    const temperature = HOTTEST * (1 - sweep / sweeps);
    for (const move of moves) {
      random = (Math.imul(random, 1664525) + 1013904223) >>> 0;
      attempt(edges, move, -temperature * Math.log((random + 1) / 2 ** 32));
    }
  }
}

// Makes a move unless it costs more than `allowed`; tells whether it gained anything.
function attempt(edges: PolarityEdges, move: Move, allowed: number): boolean {
  const before = edges.cost;
  for (const node of move) edges.turn(node);
  const cost = edges.cost - before;
  if (cost >= 0 && (cost > allowed || allowed === 0)) for (const node of move) edges.turn(node);
  return cost < 0;
}

// The node and every node whose polarity follows from it, each once; undefined if too many.
function cascade(edges: PolarityEdges, node: number): Move | undefined {
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
