import type { Fault } from '../../../runtime/engine.js';
import { LaneEngine } from '../../../runtime/laneEngine.js';
import type { LaneModel } from '../../../runtime/laneModel.js';
import type { StateMap } from '../../../runtime/stateBits.js';
import type { LaneMachine } from './laneMachine.js';
import { BLOCK_WORDS } from './laneOperations.js';

/** Lanes on a compiled model of `BLOCK_LANES` lanes, an engine for each block. */
export class CompiledLanes implements LaneMachine {
  readonly blocks: number;
  readonly map: StateMap;
  readonly #engines: readonly LaneEngine[];
  /** Per block and word, the lanes that ended in the cycle just run. */
  readonly #ended: Int32Array;

  private constructor(model: LaneModel, engines: readonly LaneEngine[]) {
    this.blocks = engines.length;
    this.map = model;
    this.#engines = engines;
    this.#ended = new Int32Array(engines.length * BLOCK_WORDS);
  }

  static async create(model: LaneModel, blocks: number): Promise<CompiledLanes> {
    return new CompiledLanes(model, await LaneEngine.createMany(model, blocks));
  }

  stateOf(block: number): Int32Array {
    const { buffer, byteOffset, length } = this.#engines[block]!.stateWords();
    return new Int32Array(buffer, byteOffset, length);
  }

  run(row: Uint32Array): void {
    for (const [block, engine] of this.#engines.entries()) {
      const ended = this.#ended.subarray(block * BLOCK_WORDS, (block + 1) * BLOCK_WORDS);
      ended.set(engine.running);
      engine.runAlike(1, row, 0);
      for (let word = 0; word < BLOCK_WORDS; word++) ended[word]! &= ~engine.running[word]!;
    }
  }

  faulty(block: number, word: number): number {
    return this.#ended[block * BLOCK_WORDS + word]!;
  }

  faultOf(block: number, lane: number): Fault {
    return this.#engines[block]!.faults.find((fault) => fault.lane === lane)!;
  }
}
