import type { Fault } from '../../../runtime/engine.js';
import type { StateMap } from '../../../runtime/stateBits.js';
import type { CyclePrograms } from '../../program/program.js';
import type { LaneMachine } from './laneMachine.js';
import { LaneProgram } from './laneProgram.js';

/** Lanes interpreted in JavaScript: slower by far than compiled ones, and ready at once. */
export class InterpretedLanes implements LaneMachine {
  readonly blocks: number;
  readonly map: StateMap;
  readonly #programs: readonly LaneProgram[];
  readonly #pattern: Uint8Array;
  #cycles = 0;
  /** The program of the cycle just run. */
  #last: LaneProgram;

  constructor({ programs, pattern }: CyclePrograms, blocks: number) {
    this.blocks = blocks;
    this.map = programs[0]!;
    this.#programs = programs.map((program) => new LaneProgram(program, blocks));
    this.#pattern = pattern;
    this.#last = this.#next;
  }

  stateOf(block: number): Int32Array {
    return this.#next.stateOf(block);
  }

  run(row: Uint32Array): void {
    const program = this.#next;
    program.run(row);
    this.#last = program;
    this.#cycles++;
    // Each program has values of its own: the state moves on to the next cycle's.
    const next = this.#next;
    if (next === program) return;
    for (let block = 0; block < this.blocks; block++) {
      next.stateOf(block).set(program.stateOf(block));
    }
  }

  faulty(block: number, word: number): number {
    return this.#last.faulty(block, word);
  }

  faultOf(block: number, lane: number): Fault {
    return this.#last.faultOf(block, lane)!;
  }

  /** The program of the next cycle, which holds the state. */
  get #next(): LaneProgram {
    return this.#programs[this.#pattern[this.#cycles % this.#pattern.length]!]!;
  }
}
