import type { ModelLayout } from './layout.js';

/**
 * Something that runs cycles of one circuit: generated code or an interpreter.
 *
 * All engines of a circuit give the same response for the same power-up and stimulus.
 */
export interface Engine {
  readonly layout: ModelLayout;

  /**
   * Sets every state element, in the order of `layout.stateNames`: 0, 1, or 2 for x (three-valued
   * engines only). Throws RangeError for a wrong length or value.
   */
  reset(state: Uint8Array): void;

  /**
   * Runs `cycles` cycles.
   *
   * `stimulus` holds packed rows (`RowLayout` of the inputs), `stimulusStride` words apart; with
   * stride 0 the one row is held for all cycles. `response` takes one packed row per cycle, or is
   * undefined if nobody looks. Throws RangeError where an array is too short, and `RunFault` if
   * the circuit cannot go on; the rows of the cycles completed before are then in place.
   */
  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void;

  /** The state elements after the cycles so far: 0, 1 or 2 for x, as for `reset`. */
  state(): Uint8Array;
}

/** Why a cycle has no result. */
export interface Fault {
  readonly message: string;
  /** `FILE:LINE:COL` of what is at fault in the netlist; empty where that is not known. */
  readonly place: string;
}

/** Thrown by `Engine.run` when a cycle has no result, such as a loop that never settles. */
export class RunFault extends Error implements Fault {
  /** Cycles completed by this call before the one that failed. */
  readonly completed: number;
  readonly place: string;

  constructor(completed: number, { message, place }: Fault) {
    super(message);
    this.name = 'RunFault';
    this.completed = completed;
    this.place = place;
  }
}
