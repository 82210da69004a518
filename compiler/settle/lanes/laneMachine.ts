import type { Fault } from '../../../runtime/engine.js';
import type { StateMap } from '../../../runtime/stateBits.js';

/**
 * Carries out the cycles of many lanes in blocks of `BLOCK_LANES`, all with the same inputs. Lanes
 * count from 0 in each block; `BLOCK_WORDS` words hold a bit for each of them.
 */
export interface LaneMachine {
  readonly blocks: number;
  readonly map: StateMap;
  /**
   * The state bits of a block, `BLOCK_WORDS` words each, to read and, before the first cycle, to
   * write: a view that lasts until the next cycle.
   */
  stateOf(block: number): Int32Array;
  /** Runs one cycle with a packed stimulus row. */
  run(row: Uint32Array): void;
  /** A 1 for each of 32 lanes that the cycle just run has no result in, unless one before had none. */
  faulty(block: number, word: number): number;
  /** Why the cycle just run has no result in a lane. */
  faultOf(block: number, lane: number): Fault;
}
