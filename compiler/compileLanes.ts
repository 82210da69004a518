import type { LaneCount } from '../runtime/laneLayout.js';
import { checkLanes } from '../runtime/laneLayout.js';
import type { LaneModel } from '../runtime/laneModel.js';
import type { Design } from './compile.js';
import { type Emitter, localEmitter } from './emit/emitter.js';
import { choosePolarity } from './passes/choosePolarity.js';
import { compact } from './passes/compact.js';
import { buildLaneProgram } from './passes/lanes/buildLaneProgram.js';
import { fallingPolarity } from './passes/lanes/fallingPolarity.js';
import { orderLaneNodes } from './passes/lanes/orderLaneNodes.js';
import { moveStates, placeLaneStates } from './passes/lanes/placeLaneStates.js';
import { transitions } from './passes/transition/transition.js';
import type { LanePrograms } from './program/laneProgram.js';

/**
 * The passes, in order, for many sequences of a circuit side by side. Throws RangeError for a
 * circuit with memories, which lanes cannot run.
 */
export function laneProgramsOf(design: Design, lanes: LaneCount): LanePrograms {
  const { circuit, clocks, schedule, layout } = design;
  refuseMemories(design);
  const cycles = transitions(circuit, clocks, schedule, { threeValued: layout.threeValued });
  // Cycles of several kinds work on the same state bits: all move the same way, none turns over.
  const areSeveral = cycles.length > 1;
  const compacted = cycles.map((cycle) => compact(cycle, areSeveral));
  const orders = compacted.map((logic) => orderLaneNodes(logic));
  const placement = placeLaneStates(compacted[0]!, orders[0]!);
  // Only vectors have an operation that inverts an operand on the way.
  const polarity = lanes === 128 ? fallingPolarity : choosePolarity;
  const programs = compacted.map((logic, i) => {
    const placed = moveStates(logic, placement);
    return buildLaneProgram(placed, orders[i]!, polarity(placed, areSeveral));
  });
  return { programs, pattern: schedule.pattern };
}

function refuseMemories({ circuit: { memories } }: Design): void {
  if (memories.length === 0) return;
  throw new RangeError(
    `lanes cannot run memories, and the circuit has ${memories.length}: ${memories[0]!.name}`,
  );
}

/** Compiles a design to a WebAssembly model of 32, 64 or 128 sequences side by side. */
export function compileLanes(
  design: Design,
  lanes: LaneCount,
  emitter: Emitter = localEmitter(),
): Promise<LaneModel> {
  checkLanes(lanes);
  return emitter.emitLanes(laneProgramsOf(design, lanes), design.layout, lanes);
}
