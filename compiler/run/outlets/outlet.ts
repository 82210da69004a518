import type { Engine } from '../../../runtime/engine.js';
import type { RunBlock } from '../../../runtime/stream.js';
import type { Design } from '../../compile.js';
import type { RunSummary } from '../runSummary.js';

/*
 * What a run is for stands in outlets: they are given every block of cycles, may end the run, and
 * add to the summary what they found. `runDesign` knows none of them by name.
 *
 * To add one: write a file in this folder with a function that returns an `OutletPlan`, give
 * `RunSummary` the optional fields that it fills (and `summaryText` their lines, `exitStatus` their
 * verdict), and let a group of options in `compiler/cli/run/` make the plan. The type of a field
 * stands in a file that imports nothing from here, as `busEvent.ts` does, since this file needs
 * `RunSummary`. A test in `test/run/outlets/` runs the outlet through `runDesign`.
 */

/** An outlet before the run, when neither its circuit nor its engine is there yet. */
export interface OutletPlan {
  /**
   * Nets to see beside the response, with the values that they have when the outputs are sampled.
   * They cost a store each in every cycle.
   */
  readonly watch?: ArrayLike<number>;

  /** Up to 32 nets to see likewise, as bits of one word: they cost less where all are waited for. */
  readonly flags?: ArrayLike<number>;

  /** Its engine must notice when a state comes again: `OutletContext.engine` is a `MarkingEngine`. */
  readonly marks?: true;

  /** Makes the outlet; files are opened and their headers read here. May throw. */
  open(context: OutletContext): Outlet | Promise<Outlet>;
}

/** What an outlet is opened with. */
export interface OutletContext {
  /** The design as asked for; its layout is that of the rows in a block. */
  readonly design: Design;
  /** The engine at work. Between two blocks its state is that after the block handed out last. */
  readonly engine: Engine;
  /** What `Outlet.save` of the outlet in its place gave, where a run goes on; else undefined. */
  readonly saved?: unknown;
  /** Where the nets of `OutletPlan.watch` stand in `OutletBlock.watched`. */
  readonly watched: WatchedPlace;
}

/** Where some watched nets stand in watched rows; bit i is bit `i % 32` of word `i >> 5`. */
export interface WatchedPlace {
  readonly firstWord: number;
  /** Where the nets of `OutletPlan.flags` stand: the word, and the place of the first one in it. */
  readonly flagWord: number;
  readonly flagBit: number;
  /** Words from one row to the next. */
  readonly stride: number;
  /** Words from a value to what tells that it is x; undefined in two-valued runs. */
  readonly toUnknown: number | undefined;
}

/** Consecutive cycles of a run. All arrays are used again for the next block. */
export interface OutletBlock extends RunBlock {
  /** Rows of what all outlets watch; see `WatchedPlace`. Without gaps at the front of the block. */
  readonly watched: Uint32Array;
}

/** The end of a run that an outlet asks for. */
export interface Stop {
  /** The last cycle that counts, one of the block's. */
  readonly lastCycle: number;
  /** Why, to be read after "stopped at cycle 12: ". */
  readonly reason: string;
  /** The condition that was waited for, where that is why. */
  readonly condition?: string;
}

/** How a run ended. */
export interface RunEnd {
  /** Cycles that count. */
  readonly cycles: number;
  /** Set where an outlet or the user ended the run. */
  readonly stopped: RunSummary['stopped'];
  /** The engine after the last block; it may have run beyond the last cycle that counts. */
  readonly engine: Engine;
}

/** What an outlet adds to the summary: fields, and notes after those of others. */
export type Findings = Partial<RunSummary>;

/** Takes the response of a run, block by block. */
export interface Outlet {
  /** Whether it looks at the response or at watched nets; false lets the engine leave them out. */
  readonly wantsResponse: boolean;

  /**
   * `none` where no run is made for its sake, `lost` once nobody wants more of it: a run ends when
   * some have lost interest and all others have none.
   */
  readonly interest?: 'none' | 'lost' | undefined;

  /**
   * Takes the next cycles. Outlets are asked in their order, and one that asks for an end cuts the
   * block for those after it: an outlet that judges therefore stands before those that write. A
   * later one may cut further, so a stop that was asked for need not be the one that counts.
   */
  take(block: OutletBlock): Stop | undefined | Promise<Stop | undefined>;

  /**
   * What is to be kept so that a run can go on from here later: JSON with `Uint8Array` and
   * `Uint32Array` in it, or undefined if there is nothing. A run with an outlet that lacks this
   * cannot be recorded.
   */
  readonly save?: (() => unknown) | undefined;

  /** Completes what it does, when the run is over; not called where the run throws. */
  finish(end: RunEnd): Findings | Promise<Findings>;

  /** Gives files their names, after all outlets have finished without throwing. */
  keep?(): void;

  /** Lets go of everything; removes what is not kept. Called at the end in any case. */
  discard(): void;
}
