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
   * engines only). Memories take the contents they had at first. Throws RangeError for a wrong
   * length or value.
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

  /**
   * The contents of all memories of `layout.memories`, in their order; see `memoryState.ts` for the
   * bytes. Empty if there are none.
   */
  memoryState(): Uint8Array;

  /**
   * Sets the contents of all memories to what `memoryState` gave. Throws RangeError for a wrong
   * length, and for bits that stand for nothing.
   */
  loadMemory(bytes: Uint8Array): void;

  /** Where the run stands: `restore` goes on from there, on this engine or another one. */
  save(): RunPoint;

  /**
   * Goes on from a point that an engine of the same circuit and clocks has saved, as that one would.
   * Throws RangeError for what is no such point.
   */
  restore(point: RunPoint): void;
}

/** An engine that notices when a state comes again. */
export interface MarkingEngine extends Engine {
  /** Whether it can: generated code must have been made for it. */
  readonly canMark: boolean;

  /**
   * Looks for the present state, memories included, from now on: after every `pace` cycles. Cycles
   * of which the last ones are no multiple of it may follow. Throws RangeError where it cannot.
   */
  mark(pace: number): void;

  /** Cycles from `mark` until the state first came again; undefined while it has not. */
  readonly repeatedAfter: number | undefined;
}

/** Where a run stands between two cycles: all that decides how any engine of a circuit goes on. */
export interface RunPoint {
  /** As `Engine.state` gives it. */
  readonly state: Uint8Array;
  /** As `Engine.memoryState` gives it. */
  readonly memory: Uint8Array;
  /** The packed stimulus row of the cycle before; undefined at power-up. */
  readonly before: Uint32Array | undefined;
  /** Cycles done, modulo the length of the clocks' pattern (1 where all clocks tick together). */
  readonly position: number;
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
