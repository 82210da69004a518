import type { RunPoint } from '../../runtime/engine.js';
import type { RunSummary } from './runSummary.js';

/** From where a run goes on: all that decides about the cycles to come and the summary. */
export interface RunStart {
  /** Cycles done. */
  readonly cycle: number;
  readonly point: RunPoint;
  /** What each outlet saved, in their order; see `Outlet.save`. */
  readonly outlets: readonly unknown[];
}

/** Keeps the moments of a run from which it can go on. */
export interface RunRecorder {
  /** Called before the first cycle. */
  begin(moment: () => RunStart): Promise<void>;
  /** Called after each block; returns at once where no moment is due. The run waits for a promise. */
  after(moment: () => RunStart): void | Promise<void>;
  /**
   * Called when the run is over and files have their names. `last` is undefined where the engine
   * has gone beyond the last cycle that counts. Returns notes for the summary.
   */
  end(summary: RunSummary, last: RunStart | undefined): Promise<readonly string[]>;
}
