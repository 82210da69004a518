import type { Fault } from '../../../runtime/engine.js';
import { bytecodeOf } from '../../interpret/bytecode.js';
import { UPDATE_WIDTH } from '../../logic/logic.js';
import { FIRST_INPUT, firstResult, firstState, type Program } from '../../program/program.js';
import { BLOCK_WORDS, chosen, runOperations } from './laneOperations.js';

/**
 * A program with the values of many lanes: every value is a bit in each lane, and an operation
 * works on all lanes of a block at once.
 */
export class LaneProgram {
  readonly #program: Program;
  /** Operands of all operations, then the values of each block, `BLOCK_WORDS` words a value. */
  readonly #memory: Int32Array;
  readonly #bases: readonly number[];
  readonly #runs: Uint32Array;
  readonly #next: Uint32Array;
  readonly #faults: Uint32Array;
  /** Per update: first state bit, the places of enable and gate, that of what is copied or -1. */
  readonly #updates: Int32Array;
  readonly #firstState: number;
  readonly #committed: Int32Array;

  constructor(program: Program, blocks: number) {
    const { runs, operands, renumbered } = bytecodeOf(program);
    const placeOf = (value: number): number => renumbered[value]! * BLOCK_WORDS;
    const blockLength = renumbered.length * BLOCK_WORDS;
    this.#program = program;
    this.#runs = runs;
    this.#memory = new Int32Array(operands.length + blocks * blockLength);
    this.#memory.set(operands.map((value) => value * BLOCK_WORDS));
    this.#bases = Array.from({ length: blocks }, (_, i) => operands.length + i * blockLength);
    for (const base of this.#bases) this.#fill(base + BLOCK_WORDS, -1);
    this.#next = program.next.map(placeOf);
    this.#faults = Uint32Array.from(program.faults, ({ when }) => placeOf(when));
    this.#firstState = firstState(program) * BLOCK_WORDS;
    this.#committed = new Int32Array(program.stateCount * BLOCK_WORDS);
    this.#updates = Int32Array.from(
      program.updates.flatMap(({ first, enable, gate, from }) => [
        first * BLOCK_WORDS,
        placeOf(enable),
        placeOf(gate),
        from < 0 ? -1 : this.#firstState + from * BLOCK_WORDS,
      ]),
    );
  }

  /** The state bits of a block, `BLOCK_WORDS` words each, to read and to write. */
  stateOf(block: number): Int32Array {
    const first = this.#bases[block]! + this.#firstState;
    return this.#memory.subarray(first, first + this.#committed.length);
  }

  /** Runs one cycle in all lanes, which all have the inputs of the row given. */
  run(row: Uint32Array): void {
    for (const base of this.#bases) {
      this.#loadInputs(base, row);
      this.#step(base);
      this.#commit(base);
    }
  }

  /**
   * Why a lane of a block has no result of the cycle just run; undefined where it has one. Lanes
   * count from 0 in each block.
   */
  faultOf(block: number, lane: number): Fault | undefined {
    const word = this.#bases[block]! + (lane >>> 5);
    const fault = this.#faults.findIndex(
      (place) => ((this.#memory[word + place]! >>> (lane & 31)) & 1) === 1,
    );
    return this.#program.faults[fault];
  }

  /** A 1 for each of 32 lanes that the cycle just run has no result in. */
  faulty(block: number, word: number): number {
    const at = this.#bases[block]! + word;
    return this.#faults.reduce((lanes, place) => lanes | this.#memory[at + place]!, 0);
  }

  #loadInputs(base: number, row: Uint32Array): void {
    const first = base + FIRST_INPUT * BLOCK_WORDS;
    for (let bit = 0; bit < this.#program.inputCount; bit++) {
      this.#fill(first + bit * BLOCK_WORDS, -((row[bit >>> 5]! >>> (bit & 31)) & 1));
    }
  }

  #fill(at: number, word: number): void {
    this.#memory.fill(word, at, at + BLOCK_WORDS);
  }

  #step(base: number): void {
    const runs = this.#runs;
    let at = 0;
    let result = base + firstResult(this.#program) * BLOCK_WORDS;
    for (let run = 0; run < runs.length; run += 2) {
      const end = result + runs[run + 1]! * BLOCK_WORDS;
      at = runOperations(runs[run]!, this.#memory, base, at, result, end);
      result = end;
    }
  }

  #commit(base: number): void {
    const memory = this.#memory;
    const committed = this.#committed;
    const next = this.#next;
    for (let bit = 0, to = 0; bit < next.length; bit++, to += BLOCK_WORDS) {
      const from = base + next[bit]!;
      for (let i = 0; i < BLOCK_WORDS; i++) committed[to + i] = memory[from + i]!;
    }
    for (let at = 0; at < this.#updates.length; at += 4) this.#update(base, at);
    memory.set(committed, base + this.#firstState);
  }

  // What updates say takes the place of what was committed for their bits.
  #update(base: number, at: number): void {
    const memory = this.#memory;
    const committed = this.#committed;
    const first = this.#updates[at]!;
    const enable = base + this.#updates[at + 1]!;
    const gate = base + this.#updates[at + 2]!;
    const from = this.#updates[at + 3]!;
    const old = base + this.#firstState + first;
    for (let i = 0; i < UPDATE_WIDTH * BLOCK_WORDS; i++) {
      const word = i % BLOCK_WORDS;
      const fresh = from < 0 ? committed[first + i]! : memory[base + from + i]!;
      committed[first + i] =
        memory[gate + word]! & chosen(memory[enable + word]!, memory[old + i]!, fresh);
    }
  }
}
