import type binaryen from 'binaryen';
import { type LaneCount, laneWordOf } from '../../../runtime/laneLayout.js';
import type { LaneModel } from '../../../runtime/laneModel.js';
import type { ModelLayout } from '../../../runtime/layout.js';
import {
  firstLaneResult,
  type LaneProgram,
  type LanePrograms,
  laneOperands,
} from '../../program/laneProgram.js';
import { ANCHOR_SLOT, anchored } from './anchored.js';
import { addCount } from './countWords.js';
import { addLaneLoop, type LaneCycle } from './laneLoop.js';
import { laneStores } from './laneStores.js';
import { type BlockPlan, type Planning, planBlock, planCopies } from './planBlock.js';
import { addSpread } from './spreadRows.js';
import { addTurn } from './turnRows.js';
import { type Word, wordOf } from './word.js';
import { type LaneModuleParts, writeBlock } from './writeBlock.js';

/** Address of the words that blocks pass on; what lies below stays zero. */
const FIRST = 1024;

/** Operations in one function: some thousands, and engines allocate registers badly. */
const BLOCK = 450;

/** Stores in one function that only copies. */
const COPIES = 400;

const roundUp = (value: number): number => Math.ceil(value / 64) * 64;

/** Emits the programs of a circuit's cycles as a module of words with a bit for each lane. */
export function emitLanes(
  wasm: typeof binaryen,
  { programs, pattern, counts = false }: LanePrograms,
  layout: ModelLayout,
  lanes: LaneCount,
): LaneModel {
  const module = new wasm.Module();
  try {
    module.setFeatures(wasm.Features.SIMD128 | wasm.Features.MutableGlobals);
    const word = wordOf(wasm, module, lanes);
    const parts: LaneModuleParts = { wasm, module, word };
    const running = FIRST;
    const scratch = running + 64;
    const faultCount = programs.reduce((sum, { faults }) => sum + faults.length, 0);
    const firstWire = ANCHOR_SLOT + 1 + faultCount;
    let firstFault = ANCHOR_SLOT + 1;
    let wireCount = 0;
    const cycles = programs.map((program, index): LaneCycle => {
      const planning = planningOf(program, layout, firstFault, firstWire);
      const faults = program.faults.map((_, i) => scratch + (firstFault + i) * word.bytes);
      firstFault += program.faults.length;
      const wires = planning.wires.reduce((sum, slot) => sum + (slot < 0 ? 0 : 1), 0);
      wireCount = Math.max(wireCount, wires);
      return { blocks: addBlocks(parts, planning, `cycle${index}`), faults };
    });
    const patternAt = roundUp(scratch + (firstWire + wireCount) * word.bytes);
    const free = roundUp(patternAt + pattern.length);
    const segment = { name: 'pattern', offset: module.i32.const(patternAt), data: pattern };
    module.setMemory(Math.ceil(free / 65536), 65536, 'memory', [segment], false, false, '0');
    const place = { scratch, running, patternAt, patternLength: pattern.length };
    addLaneLoop(parts, place, cycles);
    addSpread(parts, layout.inputs, layout.threeValued);
    if (counts) {
      addTurn(parts);
      addCount(parts, layout.threeValued);
    }
    return {
      bytes: Uint8Array.from(module.emitBinary()),
      layout,
      lanes,
      memory: { running, faults: scratch + (ANCHOR_SLOT + 1) * word.bytes, free },
      states: programs[0]!.states,
      stateInverted: programs[0]!.stateInverted,
      pattern,
      faults: programs.map(({ faults }) =>
        faults.map(({ message, place }) => ({ message, place })),
      ),
    };
  } finally {
    module.dispose();
  }
}

function planningOf(
  program: LaneProgram,
  { inputs, outputs }: ModelLayout,
  firstFault: number,
  firstWire: number,
): Planning {
  return {
    program,
    stores: laneStores(program, outputs, firstFault),
    inputSlots: Int32Array.from({ length: program.inputCount }, (_, bit) =>
      laneWordOf(inputs, bit),
    ),
    wires: wiresOf(program, firstWire),
  };
}

// The cycle of a small circuit stands in the loop, those of others in functions.
function addBlocks(parts: LaneModuleParts, planning: Planning, cycle: string): LaneCycle['blocks'] {
  const plans = plansOf(planning, parts.word);
  const { program, stores } = planning;
  if (program.op.length <= BLOCK && stores.rest.length <= COPIES) return [...plans];
  const names: string[] = [];
  // One plan at a time: together they would take many times the room of the program.
  for (const plan of plans) {
    names.push(`${cycle}_block${names.length}`);
    writeBlock(parts, names.at(-1)!, plan);
  }
  return names;
}

function* plansOf(planning: Planning, { registers, kept }: Word): Generator<BlockPlan> {
  const count = planning.program.op.length;
  for (let start = 0; start < count; start += BLOCK) {
    const plan = planBlock(planning, start, Math.min(count, start + BLOCK), kept);
    yield anchored(plan, registers);
  }
  const { rest } = planning.stores;
  for (let from = 0; from < rest.length; from += COPIES) {
    yield planCopies(planning, rest.slice(from, from + COPIES));
  }
}

// Operations whose result is read in a later block get a scratch word, from `firstWire` on.
function wiresOf(program: LaneProgram, firstWire: number): Int32Array {
  const first = firstLaneResult(program);
  const columns = [program.a, program.b, program.c];
  const crosses = new Uint8Array(program.op.length);
  for (let i = 0; i < program.op.length; i++) {
    for (let k = 0; k < laneOperands[program.op[i]!]!; k++) {
      const operand = columns[k]![i]! - first;
      if (operand >= 0 && blockOf(operand) < blockOf(i)) crosses[operand] = 1;
    }
  }
  let next = firstWire;
  return Int32Array.from(crosses, (isWire) => (isWire === 1 ? next++ : -1));
}

const blockOf = (operation: number): number => Math.floor(operation / BLOCK);
