import type { Engine, RunPoint } from '../../runtime/engine.js';
import { checkBefore, checkRun, lastRow } from '../../runtime/engineArguments.js';
import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import { checkMemoryState } from '../../runtime/memoryState.js';
import { loadStates, type StateMap, showStates } from '../../runtime/stateBits.js';
import type { CyclePrograms } from '../program/program.js';
import { BytecodeMemory } from './bytecodeMemory.js';
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
  readonly #memory: BytecodeMemory;
  #position = 0;
  #before: Uint32Array | undefined;

  constructor({ programs, pattern, memories }: CyclePrograms, layout: ModelLayout) {
    this.layout = layout;
    this.#states = programs[0]!;
    this.#memory = new BytecodeMemory({ memories }, layout.threeValued);
    this.#programs = programs.map((program) => new BytecodeProgram(program, this.#memory));
    this.#pattern = pattern;
  }

  reset(state: Uint8Array): void {
    const bits = loadStates(this.layout, this.#states, state);
    this.#position = 0;
    this.#before = undefined;
    this.#next.stateBits.set(bits);
    this.#memory.reset();
  }

  save(): RunPoint {
    const [state, memory] = [this.state(), this.memoryState()];
    return { state, memory, before: this.#before, position: this.#position };
  }

  restore({ state, memory, before, position }: RunPoint): void {
    checkBefore(this.layout, before);
    const bits = loadStates(this.layout, this.#states, state, before);
    this.#position = position % this.#pattern.length;
    this.#before = before;
    this.#next.stateBits.set(bits);
    this.loadMemory(memory);
  }

  state(): Uint8Array {
    return showStates(this.layout, this.#states, this.#next.stateBits);
  }

  memoryState(): Uint8Array {
    return this.#memory.contents.slice();
  }

  loadMemory(bytes: Uint8Array): void {
    checkMemoryState(this.layout, bytes);
    this.#memory.contents.set(bytes);
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
    if (cycles > 0) this.#before = lastRow(this.layout, cycles, stimulus, stimulusStride);
  }

  /** The program of the next cycle, which holds the state. */
  get #next(): BytecodeProgram {
    return this.#programs[this.#pattern[this.#position]!]!;
  }
}
