import type { LaneFault } from '../../../runtime/laneEngine.js';
import type { ModelLayout } from '../../../runtime/layout.js';
import { loadStates, showStates } from '../../../runtime/stateBits.js';
import type { LaneMachine } from './laneMachine.js';
import { BLOCK_LANES, BLOCK_WORDS } from './laneOperations.js';

/**
 * Runs one circuit from many power-ups at once, all with the same inputs: a bit of a word each.
 *
 * Lane i does exactly what an engine of the same circuit does from the i-th power-up.
 */
export class LaneRunner {
  readonly lanes: number;
  /** Cycles run so far. */
  cycles = 0;
  /** The lanes that have ended, in the order in which they did. */
  readonly faults: LaneFault[] = [];
  readonly #layout: ModelLayout;
  readonly #machine: LaneMachine;
  /** State bit of each element that tells its value, and whether it is kept inverted. */
  readonly #bitOf: Int32Array;
  /** State bits that are not there to fill a group of neighbours. */
  readonly #meaningful: Uint32Array;
  /** Per word of 32 lanes, a 1 for each lane that goes on. */
  readonly #running: Int32Array;

  /**
   * `powerUp` gives each lane its state, as `Engine.reset` takes it. Throws RangeError for lanes
   * that are no count from 1 on or more than the machine's blocks hold, and what `Engine.reset`
   * throws.
   */
  constructor(
    machine: LaneMachine,
    layout: ModelLayout,
    lanes: number,
    powerUp: (lane: number) => Uint8Array,
  ) {
    const most = machine.blocks * BLOCK_LANES;
    if (!Number.isSafeInteger(lanes) || lanes < 1 || lanes > most) {
      throw new RangeError(`lanes are a count from 1 to ${most}, got ${lanes}`);
    }
    this.lanes = lanes;
    this.#layout = layout;
    this.#machine = machine;
    this.#bitOf = new Int32Array(layout.stateNames.length);
    this.#machine.map.states.forEach(({ role, index }, bit) => {
      if (role === 'value') this.#bitOf[index] = bit;
    });
    this.#meaningful = Uint32Array.from(this.#machine.map.states.keys()).filter(
      (bit) => this.#machine.map.states[bit]!.role !== 'unused',
    );
    this.#running = new Int32Array(machine.blocks * BLOCK_WORDS);
    for (let lane = 0; lane < lanes; lane++) {
      this.#running[lane >>> 5]! |= 1 << (lane & 31);
      this.#load(lane, loadStates(layout, this.#machine.map, powerUp(lane)));
    }
  }

  /** Runs one cycle with a packed stimulus row that holds for all lanes. */
  run(row: Uint32Array): void {
    this.#machine.run(row);
    this.#dropFaulty();
    this.cycles++;
  }

  /** The lowest lane that goes on; -1 where all have ended. */
  get firstRunning(): number {
    const word = this.#running.findIndex((lanes) => lanes !== 0);
    return word < 0 ? -1 : word * 32 + lowestBit(this.#running[word]!);
  }

  /** The state of one lane, as `Engine.state` gives it. What a lane has that ended is no state. */
  stateOf(lane: number): Uint8Array {
    const words = this.#machine.stateOf(Math.floor(lane / BLOCK_LANES));
    const word = (lane >>> 5) % BLOCK_WORDS;
    const bits = this.#machine.map.states.map(
      (_, bit) => words[bit * BLOCK_WORDS + word]! >>> (lane & 31),
    );
    return showStates(this.#layout, this.#machine.map, bits);
  }

  /**
   * Calls `found` for each state element on which running lanes disagree, with the lowest lane
   * that differs from `lane`, a running one, and the value of `lane`. Two-valued programs only.
   */
  eachDifference(
    lane: number,
    found: (element: number, other: number, value: number) => void,
  ): void {
    const blocks = Array.from({ length: this.#machine.blocks }, (_, block) =>
      this.#machine.stateOf(block),
    );
    const home = blocks[Math.floor(lane / BLOCK_LANES)]!;
    const homeWord = (lane >>> 5) % BLOCK_WORDS;
    for (let element = 0; element < this.#bitOf.length; element++) {
      const bit = this.#bitOf[element]!;
      const kept = (home[bit * BLOCK_WORDS + homeWord]! >>> (lane & 31)) & 1;
      const other = this.#firstUnlike(blocks, bit * BLOCK_WORDS, -kept);
      if (other >= 0) found(element, other, kept ^ this.#machine.map.stateInverted[bit]!);
    }
  }

  /** A copy of the state of all lanes, for `isAt`. */
  snapshot(): Int32Array[] {
    return Array.from({ length: this.#machine.blocks }, (_, block) =>
      this.#machine.stateOf(block).slice(),
    );
  }

  /** Whether every running lane is in the state that it had when a copy was made. */
  isAt(snapshot: readonly Int32Array[]): boolean {
    return snapshot.every((saved, block) => {
      const words = this.#machine.stateOf(block);
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

  #dropFaulty(): void {
    const machine = this.#machine;
    for (let word = 0; word < this.#running.length; word++) {
      const block = Math.floor(word / BLOCK_WORDS);
      const faulty = machine.faulty(block, word % BLOCK_WORDS) & this.#running[word]!;
      this.#running[word]! &= ~faulty;
      for (let rest = faulty; rest !== 0; rest &= rest - 1) {
        const lane = word * 32 + lowestBit(rest);
        const { message, place } = machine.faultOf(block, lane % BLOCK_LANES);
        this.faults.push({ lane, cycle: this.cycles, message, place });
      }
    }
  }

  #load(lane: number, bits: Uint8Array): void {
    const words = this.#machine.stateOf(Math.floor(lane / BLOCK_LANES));
    const word = (lane >>> 5) % BLOCK_WORDS;
    const own = 1 << (lane & 31);
    bits.forEach((value, bit) => {
      const at = bit * BLOCK_WORDS + word;
      words[at] = (words[at]! & ~own) | (value === 0 ? 0 : own);
    });
  }
}

const lowestBit = (word: number): number => 31 - Math.clz32(word & -word);
