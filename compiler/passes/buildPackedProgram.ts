import type { Literal } from '../logic/logic.js';
import { FIRST_INPUT, type Program } from '../program/program.js';
import {
  type Gather,
  stepOperands,
  VectorOp,
  type VectorStage,
  type VectorStep,
} from '../program/vectorCode.js';
import { ProgramWriter } from './buildProgram.js';
import { cutBlocks } from './cutBlocks.js';
import type { PackedLogic } from './packWords/packWords.js';

/**
 * Writes a packed graph as a program: the single operations of `order`, stage by stage, each in the
 * polarity chosen, and the vector steps between them.
 */
export function buildPackedProgram(
  packed: PackedLogic,
  order: Uint32Array,
  inverted: Uint8Array,
  blockNodes?: number,
): Program {
  const { scalar, plan, stageOf, stageCount } = packed;
  const writer = new ProgramWriter(scalar, inverted);
  const numbers = stepNumbers(packed);
  const stages: VectorStage[] = [];
  for (let stage = 0, stepEnd = 0; stage < stageCount; stage++) {
    if (stage > 0) writer.startBlock();
    writeStage(
      packed,
      writer,
      order.filter((node) => stageOf[node] === stage),
      blockNodes,
    );
    stepEnd += plan.steps.filter((step) => step.stage === stage).length;
    const gathers = packed.gathers
      .filter((gather) => gather.stage === stage)
      .map((gather) => gatherOf(writer, gather));
    stages.push({ blockEnd: writer.blockCount, gathers, stepEnd });
  }
  const steps = orderedSteps(packed, writer, numbers);
  const moved = <Sink extends { readonly step: number }>(sinks: readonly Sink[]): Sink[] =>
    sinks.map((sink) => ({ ...sink, step: numbers[sink.step]! }));
  return {
    ...writer.finish(packed.rowOutputs),
    vectors: {
      slotCount: plan.slotCount,
      rowInputs: packed.rowInputs,
      steps,
      stages,
      slots: moved(packed.slots),
      states: moved(packed.states),
      outputs: moved(packed.outputs),
      rows: moved(packed.rows),
    },
  };
}

function writeStage(
  { scalar }: PackedLogic,
  writer: ProgramWriter,
  nodes: Uint32Array,
  blockNodes: number | undefined,
): void {
  const starts = cutBlocks(scalar, nodes, blockNodes);
  let block = 1;
  for (const [place, node] of nodes.entries()) {
    if (place === starts[block]) {
      writer.startBlock();
      block++;
    }
    writer.write(node);
  }
}

function gatherOf(
  writer: ProgramWriter,
  { slot, literals }: { slot: number; literals: readonly Literal[] },
): Gather {
  return {
    slot,
    values: Int32Array.from(literals, (literal) => (literal < 0 ? -1 : writer.value(literal))),
  };
}

// The steps of a stage stand together; their order within it stays.
function stepNumbers({ plan, stageCount }: PackedLogic): Uint32Array {
  const numbers = new Uint32Array(plan.steps.length);
  let number = 0;
  for (let stage = 0; stage < stageCount; stage++) {
    for (const [step, { stage: own }] of plan.steps.entries()) {
      if (own === stage) numbers[step] = number++;
    }
  }
  return numbers;
}

function orderedSteps(
  { plan, rowInputs }: PackedLogic,
  writer: ProgramWriter,
  numbers: Uint32Array,
): VectorStep[] {
  const steps = new Array<VectorStep>(plan.steps.length);
  for (const [index, { op, a, b, c, lanes }] of plan.steps.entries()) {
    const [p, q, r] = [a, b, c].map((operand, i) =>
      i < stepOperands[op]! ? numbers[operand]! : operand,
    );
    const source = plan.splats.get(index);
    const splat =
      source === undefined
        ? p!
        : 'lane' in source
          ? FIRST_INPUT + rowInputs + source.lane
          : writer.value(source.literal);
    steps[numbers[index]!] = { op, a: op === VectorOp.Splat ? splat : p!, b: q!, c: r!, lanes };
  }
  return steps;
}
