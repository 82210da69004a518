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
import { modelLayout } from './circuit/modelLayout.js';
import { type Emitter, localEmitter } from './emit/emitter.js';
import { buildProgram } from './passes/buildProgram.js';
import { choosePolarity } from './passes/choosePolarity.js';
import { compact } from './passes/compact.js';
import { cutBlocks } from './passes/cutBlocks.js';
import { groupRegisters } from './passes/groupRegisters/groupRegisters.js';
import { orderNodes } from './passes/orderNodes.js';
import { orderSinks } from './passes/orderSinks.js';
import { transitions } from './passes/transition/transition.js';
import type { CyclePrograms } from './program/program.js';

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
  if (untimed) throw new RangeError(`clock ${untimed.name} has no timing`);
}

/** The passes, in order: from a circuit to the programs that emission and interpretation take. */
export function programsOf({ circuit, clocks, schedule, layout }: Design): CyclePrograms {
  const cycles = transitions(circuit, clocks, schedule, { threeValued: layout.threeValued });
  // Cycles of several kinds work on the same state bits: none of them may move or turn any.
  const areSeveral = cycles.length > 1;
  const programs = cycles.map((cycle) => {
    const whole = compact(cycle, areSeveral);
    const logic = areSeveral ? whole : compact(groupRegisters(whole));
    const order = orderNodes(logic, orderSinks(logic));
    const inverted = choosePolarity(logic, areSeveral);
    return buildProgram(logic, order, cutBlocks(logic, order), inverted);
  });
  return { programs, pattern: schedule.pattern };
}

/** Compiles a design to a WebAssembly model. */
export function compile(design: Design, emitter: Emitter = localEmitter()): Promise<WasmModel> {
  return emitter.emit(programsOf(design), design.layout);
}
