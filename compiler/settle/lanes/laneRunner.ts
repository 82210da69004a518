import type { Fault } from '../../../runtime/engine.js';
import type { ModelLayout } from '../../../runtime/layout.js';
import { loadStates, type StateMap, showStates } from '../../../runtime/stateBits.js';
import type { CyclePrograms } from '../../program/program.js';
import { BLOCK_LANES, BLOCK_WORDS } from './laneOperations.js';
import { LaneProgram } from './laneProgram.js';

/** A lane that ended because a cycle has no result, as `RunFault` ends the run of an engine. */
export interface LaneFault extends Fault {
  readonly lane: number;
  /** The cycle without result, from 0. */
  readonly cycle: number;
}

/**
 * Runs one circuit from many power-ups at once, all with the same inputs: a bit of a word each.
 *
 * Lane i does exactly what an engine of the same programs does from the i-th power-up.
 */
export class LaneRunner {
  readonly lanes: number;
  /** Cycles run so far. */
  cycles = 0;
  /** The lanes that have ended, in the order in which they did. */
  readonly faults: LaneFault[] = [];
  readonly #layout: ModelLayout;
  readonly #map: StateMap;
  readonly #programs: readonly LaneProgram[];
  readonly #pattern: Uint8Array;
  /** State bit of each element that tells its value, and whether it is kept inverted. */
  readonly #bitOf: Int32Array;
  /** State bits that are not there to fill a group of neighbours. */
  readonly #meaningful: Uint32Array;
  /** Per word of 32 lanes, a 1 for each lane that goes on. */
  readonly #running: Int32Array;

  /**
   * `powerUp` gives each lane its state, as `Engine.reset` takes it. Throws RangeError for lanes
   * that are no count from 1 on, and what `Engine.reset` throws.
   */
  constructor(
    { programs, pattern }: CyclePrograms,
    layout: ModelLayout,
    lanes: number,
    powerUp: (lane: number) => Uint8Array,
  ) {
    if (!Number.isSafeInteger(lanes) || lanes < 1) {
      throw new RangeError(`lanes are a count from 1 on, got ${lanes}`);
    }
    const blocks = Math.ceil(lanes / BLOCK_LANES);
    this.lanes = lanes;
    this.#layout = layout;
    this.#map = programs[0]!;
    this.#programs = programs.map((program) => new LaneProgram(program, blocks));
    this.#pattern = pattern;
    this.#bitOf = new Int32Array(layout.stateNames.length);
    this.#map.states.forEach(({ role, index }, bit) => {
      if (role === 'value') this.#bitOf[index] = bit;
    });
    this.#meaningful = Uint32Array.from(this.#map.states.keys()).filter(
      (bit) => this.#map.states[bit]!.role !== 'unused',
    );
    this.#running = new Int32Array(blocks * BLOCK_WORDS);
    for (let lane = 0; lane < lanes; lane++) {
      this.#running[lane >>> 5]! |= 1 << (lane & 31);
      this.#load(lane, loadStates(layout, this.#map, powerUp(lane)));
    }
  }

  /** Runs one cycle with a packed stimulus row that holds for all lanes. */
  run(row: Uint32Array): void {
    const program = this.#next;
    program.run(row);
    this.#dropFaulty(program);
    this.cycles++;
    // Each program has values of its own: the state moves on to the next cycle's.
    const next = this.#next;
    if (next === program) return;
    for (let block = 0; block < this.#blocks; block++) {
      next.stateOf(block).set(program.stateOf(block));
    }
  }

  /** The lowest lane that goes on; -1 where all have ended. */
  get firstRunning(): number {
    const word = this.#running.findIndex((lanes) => lanes !== 0);
    return word < 0 ? -1 : word * 32 + lowestBit(this.#running[word]!);
  }

  /** The state of one lane, as `Engine.state` gives it. What a lane has that ended is no state. */
  stateOf(lane: number): Uint8Array {
    const words = this.#next.stateOf(Math.floor(lane / BLOCK_LANES));
    const word = (lane >>> 5) % BLOCK_WORDS;
    const bits = this.#map.states.map((_, bit) => words[bit * BLOCK_WORDS + word]! >>> (lane & 31));
    return showStates(this.#layout, this.#map, bits);
  }

  /**
   * Calls `found` for each state element on which running lanes disagree, with the lowest lane
   * that differs from `lane`, a running one, and the value of `lane`. Two-valued programs only.
   */
  eachDifference(
    lane: number,
    found: (element: number, other: number, value: number) => void,
  ): void {
    const blocks = Array.from({ length: this.#blocks }, (_, block) => this.#next.stateOf(block));
    const home = blocks[Math.floor(lane / BLOCK_LANES)]!;
    const homeWord = (lane >>> 5) % BLOCK_WORDS;
    for (let element = 0; element < this.#bitOf.length; element++) {
      const bit = this.#bitOf[element]!;
      const kept = (home[bit * BLOCK_WORDS + homeWord]! >>> (lane & 31)) & 1;
      const other = this.#firstUnlike(blocks, bit * BLOCK_WORDS, -kept);
      if (other >= 0) found(element, other, kept ^ this.#map.stateInverted[bit]!);
    }
  }

  /** A copy of the state of all lanes, for `isAt`. */
  snapshot(): Int32Array[] {
    return Array.from({ length: this.#blocks }, (_, block) => this.#next.stateOf(block).slice());
  }

  /** Whether every running lane is in the state that it had when a copy was made. */
  isAt(snapshot: readonly Int32Array[]): boolean {
    return snapshot.every((saved, block) => {
      const words = this.#next.stateOf(block);
      const running = this.#running.subarray(block * BLOCK_WORDS);
      for (const bit of this.#meaningful) {
        for (let i = 0, at = bit * BLOCK_WORDS; i < BLOCK_WORDS; i++, at++) {
          if (((words[at]! ^ saved[at]!) & running[i]!) !== 0) return false;
        }
      }
      return true;
    });
  }

  #firstUnlike(blocks: readonly Int32Array[], at: number, value: number): number {
    for (let block = 0, word = 0; block < blocks.length; block++) {
      const words = blocks[block]!;
      for (let i = 0; i < BLOCK_WORDS; i++, word++) {
        const unlike = (words[at + i]! ^ value) & this.#running[word]!;
        if (unlike !== 0) return word * 32 + lowestBit(unlike);
      }
    }
    return -1;
  }

  #dropFaulty(program: LaneProgram): void {
    for (let word = 0; word < this.#running.length; word++) {
      const block = Math.floor(word / BLOCK_WORDS);
      const faulty = program.faulty(block, word % BLOCK_WORDS) & this.#running[word]!;
      this.#running[word]! &= ~faulty;
      for (let rest = faulty; rest !== 0; rest &= rest - 1) {
        const lane = word * 32 + lowestBit(rest);
        const { message, place } = program.faultOf(block, lane % BLOCK_LANES)!;
        this.faults.push({ lane, cycle: this.cycles, message, place });
      }
    }
  }

  #load(lane: number, bits: Uint8Array): void {
    const words = this.#next.stateOf(Math.floor(lane / BLOCK_LANES));
    const word = (lane >>> 5) % BLOCK_WORDS;
    bits.forEach((value, bit) => {
      words[bit * BLOCK_WORDS + word]! |= value << (lane & 31);
    });
  }

  get #blocks(): number {
    return this.#running.length / BLOCK_WORDS;
  }

  /** The program of the next cycle, which holds the state. */
  get #next(): LaneProgram {
    return this.#programs[this.#pattern[this.cycles % this.#pattern.length]!]!;
  }
}

const lowestBit = (word: number): number => 31 - Math.clz32(word & -word);
