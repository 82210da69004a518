import type { ModelLayout } from '../runtime/layout.js';
import type { WasmModel } from '../runtime/wasmModel.js';
import type { Circuit } from './circuit/circuit.js';
import { type ClockPorts, findClockPorts } from './circuit/clockPorts.js';
import { modelLayout } from './circuit/modelLayout.js';
import { type Emitter, localEmitter } from './emit/emitter.js';
import { buildProgram } from './passes/buildProgram.js';
import { choosePolarity } from './passes/choosePolarity.js';
import { compact } from './passes/compact.js';
import { groupRegisters } from './passes/groupRegisters/groupRegisters.js';
import { orderNodes } from './passes/orderNodes.js';
import { orderSinks } from './passes/orderSinks.js';
import { transition } from './passes/transition/transition.js';
import type { Program } from './program/program.js';

/** What the stages after reading need to know. */
export interface CompileOptions {
  /** Names of the clock ports; found by analysis unless given. */
  readonly clocks?: readonly string[];
  /** Values 0, 1 and x instead of 0 and 1. */
  readonly threeValued?: boolean;
}

/** A circuit together with what all engines of it share. */
export interface Design {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
  readonly layout: ModelLayout;
}

/** Finds the clocks of a circuit and lays out its rows. Throws RangeError for an unknown clock. */
export function designOf(circuit: Circuit, options: CompileOptions = {}): Design {
  const clocks = findClockPorts(circuit, options.clocks);
  return { circuit, clocks, layout: modelLayout(circuit, clocks, options.threeValued ?? false) };
}

/** The passes, in order: from a circuit to the program that emission and interpretation take. */
export function programOf({ circuit, clocks, layout }: Design): Program {
  const cycle = transition(circuit, clocks, { threeValued: layout.threeValued });
  const logic = compact(groupRegisters(compact(cycle)));
  const order = orderNodes(logic, orderSinks(logic));
  const inverted = choosePolarity(logic);
  return buildProgram(logic, order, inverted);
}

/** Compiles a design to a WebAssembly model. */
export function compile(design: Design, emitter: Emitter = localEmitter()): Promise<WasmModel> {
  return emitter.emit(programOf(design), design.layout);
}
