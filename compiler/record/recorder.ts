import { figure } from '../report/figures.js';
import { shellWord } from '../report/shellText.js';
import type { RunRecorder, RunStart } from '../run/runRecorder.js';
import { INTERRUPTED, type RunSummary } from '../run/runSummary.js';
import type { RunRecord } from './runRecord.js';

/** Time between two checkpoints, at least, unless another one is given. */
const INTERVAL_MS = 1000;

/** The part of the time of this thread that making checkpoints may take. */
const SHARE = 1 / 40;

/**
 * How long writing goes on beside the run. A step of it waits for the end of a block; where blocks
 * take long, it is better to wait for it once.
 */
const PATIENCE_MS = 1000;

/**
 * Writes a checkpoint about every second, less often where that would slow the run down by more
 * than a fortieth; compressing and writing happen beside the run as far as it lets them.
 *
 * Where one cannot be written the run goes on, and so does the record from the next one that can.
 */
export class Recorder implements RunRecorder {
  readonly #record: RunRecord;
  readonly #tell: (text: string) => void;
  readonly #interval: number;
  #due = 0;
  #writing: Promise<void> | undefined;
  /** When the checkpoint at hand was started, and for how long it has kept the run. */
  #started = 0;
  #kept = 0;
  #last = 0;
  #failures = 0;
  #isFailing = false;

  /** `tell` takes warnings, a line each; `interval` is in milliseconds. */
  constructor(record: RunRecord, tell: (text: string) => void, interval = INTERVAL_MS) {
    this.#record = record;
    this.#tell = tell;
    this.#interval = interval;
  }

  /** Cycles done at the newest checkpoint. */
  get last(): number {
    return this.#last;
  }

  /** Waits until no checkpoint is being written. */
  async settled(): Promise<void> {
    await this.#writing;
  }

  async begin(moment: () => RunStart): Promise<void> {
    await this.#record.clear();
    const start = moment();
    // Without a first checkpoint there is no record.
    await this.#record.add(start);
    this.#last = start.cycle;
    this.#due = performance.now() + this.#interval;
  }

  after(moment: () => RunStart): void | Promise<void> {
    const now = performance.now();
    if (this.#writing !== undefined) {
      return now - this.#started < PATIENCE_MS ? undefined : this.#wait(this.#writing);
    }
    if (now >= this.#due) void this.#start(moment);
    return undefined;
  }

  async end(summary: RunSummary, last: RunStart | undefined): Promise<string[]> {
    await this.#writing;
    const isInterrupted = summary.stopped?.reason === INTERRUPTED;
    if (last !== undefined && last.cycle > this.#last) await this.#start(() => last);
    const notes = isInterrupted
      ? [`go on with: clockstride resume ${shellWord(this.#record.shown)}`]
      : [];
    if (!isInterrupted) {
      await this.#attempt(() => this.#record.close(summary), 'the end of the run');
    }
    if (this.#failures === 0) return notes;
    const cycle = figure(this.#last);
    const times = `${this.#failures} times the record could not be written`;
    return [`${times}; its newest checkpoint is of cycle ${cycle}`, ...notes];
  }

  #start(moment: () => RunStart): Promise<void> {
    this.#started = performance.now();
    const start = moment();
    const added = this.#record.add(start);
    this.#kept = performance.now() - this.#started;
    this.#writing = this.#attempt(() => added, 'a checkpoint').then((isWritten) => {
      if (isWritten) this.#last = start.cycle;
      this.#due = this.#started + Math.max(this.#interval, this.#kept / SHARE);
      this.#writing = undefined;
    });
    return this.#writing;
  }

  async #wait(writing: Promise<void>): Promise<void> {
    const from = performance.now();
    // Noted before it is over: then the time of the next one is set by it.
    const noted = writing.finally(() => {
      this.#due += (performance.now() - from) / SHARE;
    });
    await noted;
  }

  async #attempt(write: () => Promise<void>, what: string): Promise<boolean> {
    try {
      await write();
      this.#isFailing = false;
      return true;
    } catch (error) {
      this.#failures++;
      if (!this.#isFailing) {
        const why = error instanceof Error ? error.message : String(error);
        this.#tell(
          `warning: ${what} could not be written to ${this.#record.shown}: ${why}; the run goes on`,
        );
      }
      this.#isFailing = true;
      return false;
    }
  }
}
