import type { Fault } from './engine.js';
import type { LaneCount } from './laneLayout.js';
import type { ModelLayout } from './layout.js';
import type { StateMap } from './stateBits.js';

/** A lane model without its bytes, which have become a module. */
export type BareLaneModel = Omit<LaneModel, 'bytes'>;

/** A model compiled for lanes: the bytes of a WebAssembly module and what is needed to run it. */
export interface LaneModel extends StateMap {
  /**
   * Exports `memory`, `run(cycles, stimulus, stimulusStride, response, responseStride, current,
   * next, position)`, which returns the number of cycles done: fewer than asked for if a running
   * lane has no result of the last of them; and `spread(from, to, rows)`, which makes lane rows of
   * packed stimulus rows.
   *
   * State areas hold a word for each state bit, in the order of `states`; the state is in `next`
   * after an odd number of cycles. Strides are in bytes.
   */
  readonly bytes: Uint8Array<ArrayBuffer>;
  readonly layout: ModelLayout;
  readonly lanes: LaneCount;
  /** Addresses in bytes. */
  readonly memory: {
    /** A word with a 1 for each lane whose faults end a run. */
    readonly running: number;
    /** A word for each fault. */
    readonly faults: number;
    /** First byte free for states and rows. */
    readonly free: number;
  };
  /** Which kind of cycle each cycle is; after the last comes the first again. */
  readonly pattern: Uint8Array;
  /** The faults of each kind of cycle; their words stand one behind another. */
  readonly faults: readonly (readonly Fault[])[];
}
