import type { Literal, Logic } from '../../logic/logic.js';
import { Cuts } from './cuts.js';
import { VARIABLES } from './functions.js';
import { type Network, NodeKind } from './network.js';
import { logicFrom, networkOf } from './networkOf.js';
import { Pricing } from './pricing.js';
import { Structures } from './structures.js';

/** Rounds over the graph; what the last ones gain is little. */
const MOST_ROUNDS = 8;
/** Nodes that are looked at in all rounds together, about a second, unless the graph has more. */
const BUDGET = 60_000;
/** Cuts that are tried for each node. */
const MOST_CUTS = 12;
/** The same where the graph is larger than the budget. */
const FEW_CUTS = 5;

/** Larger graphs are left as they are: a round takes up to thirty microseconds a node. */
const MOST_NODES = 150_000;

/** Made at the first use: it takes some hundredths of a second. */
let pricing: Pricing | undefined;

/**
 * Replaces small parts of a graph by others that compute the same with fewer operations, where what
 * the graph computes anyway is counted in.
 *
 * Each node is looked at as a function of up to four others, in a few ways. The shortest formulas of
 * each such function are known (`Structures`); the one is taken that adds the least to the graph,
 * less what dies with the node (A. Mishchenko, S. Chatterjee, R. Brayton, "DAG-aware AIG rewriting",
 * DAC 2006, with exclusive-ors as operations). Some replacements that save nothing are made as well,
 * since they may open the way to others. Multiplexers are three operations here, and are put together
 * again at the end. State bits, updates, outputs and their order stay.
 */
export function rewriteCuts(logic: Logic): Logic {
  if (logic.nodeCount > MOST_NODES) return logic;
  pricing ??= new Pricing(new Structures());
  const rounds = Math.max(1, Math.min(MOST_ROUNDS, Math.floor(BUDGET / logic.nodeCount)));
  let current = logic;
  for (let round = 0; round < rounds; round++) {
    const drawn = networkOf(current);
    const gained = rewrite(drawn.network, pricing, logic.nodeCount > BUDGET ? FEW_CUTS : MOST_CUTS);
    current = logicFrom(drawn);
    if (gained === 0) break;
  }
  return current;
}

/** One round over all nodes; returns how many were saved. */
function rewrite(network: Network, prices: Pricing, mostCuts: number): number {
  const cuts = new Cuts(network, mostCuts);
  prices.turnTo(network);
  const { nodeCount } = network;
  let gained = 0;
  for (let node = 1; node < nodeCount; node++) {
    if (network.kind(node) === NodeKind.Leaf || network.isDead(node)) continue;
    if (network.now(node * 2) === node * 2) gained += rewriteNode(network, node, cuts, prices);
  }
  return gained;
}

function rewriteNode(network: Network, node: number, cuts: Cuts, prices: Pricing): number {
  let best = -1;
  let replacement = -1;
  const first = cuts.first(node);
  for (let cut = first; cut < first + cuts.count(node); cut++) {
    const leaves = livingLeaves(network, cuts, cut);
    if (leaves === undefined) continue;
    // What is read here stays alive.
    for (const leaf of leaves) network.read(leaf);
    const readers = network.readers(node);
    const saved = network.takeOut(node);
    const table = cuts.table(cut);
    const added = prices.price(table, leaves, saved - best - 1);
    if (added !== undefined) {
      const made = prices.build(table);
      if (made >>> 1 !== node) {
        best = saved - added;
        replacement = made;
      }
    }
    network.bringBack(node, readers);
    for (const leaf of leaves) network.leave(leaf);
  }
  if (replacement < 0) return 0;
  network.replace(node, replacement);
  return best;
}

// What stands for the leaves of a cut; undefined if one has gone out of use.
function livingLeaves(network: Network, cuts: Cuts, cut: number): Literal[] | undefined {
  const leaves: Literal[] = [];
  for (let i = 0; i < VARIABLES; i++) {
    const leaf = cuts.leaf(cut, i);
    if (leaf < 0) break;
    const literal = network.now(leaf * 2);
    if (network.isDead(literal >>> 1)) return undefined;
    leaves.push(literal);
  }
  return leaves;
}
