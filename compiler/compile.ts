import type { ModelLayout } from '../runtime/layout.js';
import type { WasmModel } from '../runtime/wasmModel.js';
import type { Circuit } from './circuit/circuit.js';
import { type ClockPorts, findClockPorts } from './circuit/clockPorts.js';
import {
  type ClockSchedule,
  type ClockTiming,
  timedSchedule,
  togetherSchedule,
} from './circuit/clockSchedule.js';
import type { MemoryShape } from './circuit/memory.js';
import { modelLayout } from './circuit/modelLayout.js';
import type { EmitOptions } from './emit/emitModel.js';
import { type Emitter, localEmitter } from './emit/emitter.js';
import { FALSE, type Logic } from './logic/logic.js';
import { sinksOf } from './logic/sinks.js';
import type { Addition } from './passes/additions/addition.js';
import { findAdditions } from './passes/additions/additions.js';
import { buildPackedProgram } from './passes/buildPackedProgram.js';
import { buildProgram } from './passes/buildProgram.js';
import { choosePolarity } from './passes/choosePolarity.js';
import { compact } from './passes/compact.js';
import { cutBlocks } from './passes/cutBlocks.js';
import { groupRegisters } from './passes/groupRegisters/groupRegisters.js';
import { type Merged, mergeRegisters } from './passes/mergeRegisters/mergeRegisters.js';
import { startBits } from './passes/mergeRegisters/startBits.js';
import { orderNodes } from './passes/orderNodes.js';
import { orderSinks } from './passes/orderSinks.js';
import { type PackedLogic, packWords } from './passes/packWords/packWords.js';
import { rewriteCuts } from './passes/rewriteCuts/rewriteCuts.js';
import { sweepNodes } from './passes/sweepNodes/sweepNodes.js';
import { transitions } from './passes/transition/transition.js';
import type { CyclePrograms, Program } from './program/program.js';
import type { PassSwitches } from './program/switches.js';

/** What the stages after reading need to know. */
export interface CompileOptions {
  /** Names of the clock ports; found by analysis unless given. */
  readonly clocks?: readonly string[];
  /** When each clock ticks, the base clock first; all together unless given. */
  readonly timings?: readonly ClockTiming[];
  /** Values 0, 1 and x instead of 0 and 1. */
  readonly threeValued?: boolean;
}

/** A circuit together with what all engines of it share. */
export interface Design {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
  readonly schedule: ClockSchedule;
  readonly layout: ModelLayout;
}

/**
 * Finds the clocks of a circuit and lays out its rows. Throws RangeError for an unknown clock and
 * for timings that cannot be run.
 */
export function designOf(circuit: Circuit, options: CompileOptions = {}): Design {
  const { timings } = options;
  const named = timings && [...new Set(timings.map(({ port }) => port))];
  if (named) refuseUntimed(circuit, named);
  const clocks = findClockPorts(circuit, options.clocks ?? named);
  const schedule = timings ? timedSchedule(clocks, timings) : togetherSchedule(clocks);
  const layout = modelLayout(circuit, clocks, options.threeValued ?? false);
  return { circuit, clocks, schedule, layout };
}

// A clock that is left out would quietly become a data input.
function refuseUntimed(circuit: Circuit, named: readonly string[]): void {
  const untimed = findClockPorts(circuit).ports.find(({ name }) => !named.includes(name));
  if (untimed) throw new RangeError(`clock ${untimed.name} has no timing; give each clock one`);
}

/** What becomes of a design in the cycles of each kind, and when which of them comes. */
export interface DesignCycles extends Omit<CyclePrograms, 'programs' | 'derived'> {
  readonly cycles: readonly Logic[];
}

/** The first pass: from a circuit to its cycles, each as a Boolean function. */
export function cyclesOf(
  { circuit, clocks, schedule, layout: { threeValued } }: Design,
  { share, recover }: PassSwitches = {},
): DesignCycles {
  const options = { threeValued, share: share ?? true, recover: recover ?? true };
  const cycles = transitions(circuit, clocks, schedule, options);
  return { cycles, pattern: schedule.pattern, memories: shapesOf(circuit) };
}

/**
 * The passes, in order: from a circuit to the programs that emission and interpretation take. With
 * `observes` they only compute the outputs: state and memories come to nothing.
 */
export const programsOf = (
  design: Design,
  observes = false,
  passes: PassSwitches = {},
): CyclePrograms => plainPrograms(cyclesOf(design, passes), passes, observes);

/** With cycles of more kinds than this, rewriting them all takes longer than it is worth. */
const MOST_REWRITTEN = 4;

function plainPrograms(
  { cycles: whole, ...rest }: DesignCycles,
  chosen: PassSwitches,
  observes = false,
): CyclePrograms {
  const passes = whole.length > MOST_REWRITTEN ? { ...chosen, rewriteCuts: false } : chosen;
  const cycles = observes ? whole.map(withoutNext) : whole;
  // Cycles of several kinds work on the same state bits: none of them may move or turn any.
  const areSeveral = cycles.length > 1 || observes;
  const programs = cycles.map((cycle) => {
    const logic = swept(compacted(cycle, passes, areSeveral), passes, areSeveral);
    return plainProgram(areSeveral ? logic : grouped(logic, passes), passes, areSeveral);
  });
  return { programs, ...rest };
}

/** Programs made by as few passes as possible: ready soon, for the first cycles. */
export function quickProgramsOf({ cycles, ...rest }: DesignCycles): CyclePrograms {
  const programs = cycles.map((cycle) => {
    const logic = compact(cycle, cycles.length > 1);
    const order = orderNodes(logic, sinksOf(logic));
    return buildProgram(logic, order, [0], new Uint8Array(logic.nodeCount));
  });
  return { programs, ...rest };
}

const withoutNext = (logic: Logic): Logic => ({
  ...logic,
  next: logic.next.map(() => FALSE),
  writes: [],
});

/**
 * The passes, in order, for generated code, which works on sixteen bits at a time where that pays.
 * `start` is the only state that the model will be reset to, with which registers can be merged.
 * Cycles of several kinds share their state and are left as `programsOf` makes them.
 */
export const packedProgramsOf = (
  design: Design,
  start?: Uint8Array,
  passes: PassSwitches = {},
): CyclePrograms => packedPrograms(cyclesOf(design, passes), start, passes);

/** The passes of `packedProgramsOf` behind the first one. */
export function packedPrograms(
  design: DesignCycles,
  start?: Uint8Array,
  passes: PassSwitches = {},
): CyclePrograms {
  const { cycles, ...rest } = design;
  const [cycle, another] = cycles;
  if (another !== undefined) return plainPrograms(design, passes);
  const whole = compacted(cycle!, passes);
  const { logic: kept, derived } = merged(whole, passes, start);
  const logic = swept(kept, passes);
  const packed = passes.packWords === false ? undefined : packWords(logic, added(logic, passes));
  const program = packed
    ? packedProgram(packed, passes)
    : plainProgram(grouped(logic, passes), passes);
  return { programs: [program], ...rest, derived };
}

const compacted = (logic: Logic, passes: PassSwitches, keepsStates = false): Logic =>
  passes.compact === false ? logic : compact(logic, keepsStates);

function swept(logic: Logic, passes: PassSwitches, keepsStates = false): Logic {
  const { share, recover, sweepNodes: sweeps } = passes;
  if (share === false || sweeps === false) return logic;
  const smaller = sweepNodes(logic, { recover });
  return smaller === logic ? logic : compacted(smaller, passes, keepsStates);
}

const added = (logic: Logic, passes: PassSwitches): readonly Addition[] =>
  passes.addWords === false ? [] : findAdditions(logic);

const grouped = (logic: Logic, passes: PassSwitches): Logic =>
  passes.groupRegisters === false ? logic : compacted(groupRegisters(logic), passes);

function merged(logic: Logic, passes: PassSwitches, start: Uint8Array | undefined): Merged {
  const { share, recover, mergeRegisters: merges } = passes;
  if (start === undefined || share === false || merges === false) return { logic, derived: [] };
  const smaller = mergeRegisters(logic, startBits(logic.states, start), { recover });
  return { logic: compacted(smaller.logic, passes), derived: smaller.derived };
}

function packedProgram(packed: PackedLogic, passes: PassSwitches): Program {
  const { scalar, fixedStates } = packed;
  const inverted = polarity(scalar, passes, fixedStates);
  return buildPackedProgram(packed, ordered(scalar, passes), inverted, passes.blockNodes);
}

function plainProgram(made: Logic, passes: PassSwitches, keepsStates = false): Program {
  const logic = passes.rewriteCuts === false ? made : rewriteCuts(made);
  const order = ordered(logic, passes);
  const inverted = polarity(logic, passes, keepsStates);
  return buildProgram(logic, order, cutBlocks(logic, order, passes.blockNodes), inverted);
}

const ordered = (logic: Logic, passes: PassSwitches): Uint32Array =>
  orderNodes(logic, passes.orderSinks === false ? sinksOf(logic) : orderSinks(logic));

const polarity = (logic: Logic, passes: PassSwitches, kept: boolean | Uint8Array): Uint8Array =>
  passes.choosePolarity === false ? new Uint8Array(logic.nodeCount) : choosePolarity(logic, kept);

// Without the ports, which are part of the programs.
const shapesOf = ({ memories }: Circuit): MemoryShape[] =>
  memories.map(({ reads, writes, ...shape }) => shape);

/** How a model is made. */
export interface ModelOptions extends EmitOptions {
  /**
   * The state elements that the model will start with. It gets faster where registers are equal
   * from there on, and refuses states in which they differ. What `save` gave can be restored; a
   * reset to a later state may be refused, since it begins anew without the inputs of the cycle
   * before, and registers may be equal to these.
   */
  readonly start?: Uint8Array;
}

/** Compiles a design to a WebAssembly model. */
export async function compile(
  design: Design,
  emitter: Emitter = localEmitter(),
  { start, ...options }: ModelOptions = {},
): Promise<WasmModel> {
  const model = await emitter.emit(
    packedProgramsOf(design, start, options.passes),
    design.layout,
    options,
  );
  return start === undefined ? model : { ...model, start };
}
