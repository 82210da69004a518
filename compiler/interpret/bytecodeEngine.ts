import type { Engine } from '../../runtime/engine.js';
import { checkRun } from '../../runtime/engineArguments.js';
import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import { loadStates, type StateMap, showStates } from '../../runtime/stateBits.js';
import type { CyclePrograms } from '../program/program.js';
import { BytecodeProgram } from './bytecodeProgram.js';

/**
 * Runs programs operation by operation over an array of values: the levelized interpreter, which
 * generated code is compared with.
 */
export class BytecodeEngine implements Engine {
  readonly layout: ModelLayout;
  readonly #states: StateMap;
  readonly #programs: readonly BytecodeProgram[];
  readonly #pattern: Uint8Array;
  #position = 0;

  constructor({ programs, pattern }: CyclePrograms, layout: ModelLayout) {
    this.layout = layout;
    this.#states = programs[0]!;
    this.#programs = programs.map((program) => new BytecodeProgram(program));
    this.#pattern = pattern;
  }

  reset(state: Uint8Array): void {
    const bits = loadStates(this.layout, this.#states, state);
    this.#position = 0;
    this.#next.stateBits.set(bits);
  }

  state(): Uint8Array {
    return showStates(this.layout, this.#states, this.#next.stateBits);
  }

  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void {
    checkRun(this.layout, cycles, stimulus, stimulusStride, response);
    const { threeValued, outputs } = this.layout;
    const responseStride = rowStride(outputs, threeValued);
    for (let cycle = 0; cycle < cycles; cycle++) {
      const program = this.#next;
      program.run(cycle, stimulus, cycle * stimulusStride, response, cycle * responseStride);
      this.#position = (this.#position + 1) % this.#pattern.length;
      // Each program has values of its own: the state moves on to the next cycle's.
      if (this.#next !== program) this.#next.stateBits.set(program.stateBits);
    }
  }

  /** The program of the next cycle, which holds the state. */
  get #next(): BytecodeProgram {
    return this.#programs[this.#pattern[this.#position]!]!;
  }
}
