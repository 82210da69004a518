import type { Logic } from '../../logic/logic.js';
import { LogicBuilder, type LogicOptions } from '../../logic/logicBuilder.js';
import { rebuildInto } from '../../logic/rebuild.js';
import { WindowProof } from '../../logic/windowProof.js';
import { likeNodes } from './likeNodes.js';

/** Values of 32 combinations that all proofs together may compute: about a tenth of a second. */
const BUDGET = 20_000_000;
/** As many more for each node. */
const BUDGET_PER_NODE = 20;

/**
 * Makes operations that are always equal, opposite or constant, whatever the inputs and the state,
 * only once: those that are alike in a random simulation, as far as it can be proven.
 *
 * The graph is built anew from the inputs on, each node in terms of what has been merged before, so
 * that few operations are to be looked at for each proof (A. Kuehlmann, F. Krohm: "Equivalence
 * checking using cuts and heaps", DAC 1997; windows and all their combinations take the place of
 * decision diagrams). State bits, outputs and their order stay; what nothing reads any more is
 * left. Returns the graph itself where nothing is found. `options` are those of the new graph.
 */
export function sweepNodes(logic: Logic, options: LogicOptions = {}): Logic {
  const { likeness, count } = likeNodes(logic);
  if (count === 0) return logic;
  const builder = new LogicBuilder(options);
  const proof = new WindowProof(builder, BUDGET + BUDGET_PER_NODE * logic.nodeCount);
  let merged = 0;
  const swept = rebuildInto(builder, logic, (node, built, moved) => {
    if (likeness[node]! < 0) return built;
    const like = moved(likeness[node]!);
    if (like === built || !proof.areEqual(built, like)) return built;
    merged++;
    return like;
  });
  return merged === 0 ? logic : swept;
}
