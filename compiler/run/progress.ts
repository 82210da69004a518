import type { createLogUpdate } from 'log-update';
import { counted, figure } from '../report/figures.js';
import { rateText } from './runSummary.js';

/** A run that takes no longer shows no progress. */
const QUIET_MS = 1000;
const INTERVAL_MS = 200;

/** Shows on a terminal how far a run is: cycles, rate, time left. Elsewhere it shows nothing. */
export class Progress {
  readonly #started = performance.now();
  readonly #stream: NodeJS.WriteStream | undefined;
  #show: Promise<ReturnType<typeof createLogUpdate>> | undefined;
  readonly #total: number | undefined;
  readonly #before: number;
  #next = this.#started + QUIET_MS;

  /**
   * `total` is the number of cycles wanted, where that is known; `before` were done already when it
   * started.
   */
  constructor(total: number | undefined, before = 0, stream: NodeJS.WriteStream = process.stderr) {
    // As good as none: what ends the run is not known.
    this.#total = total === Number.MAX_SAFE_INTEGER ? undefined : total;
    this.#before = before;
    this.#stream = stream.isTTY ? stream : undefined;
  }

  /** Call it often: it shows something a few times a second. */
  update(cycles: number): void {
    if (this.#stream === undefined) return;
    const now = performance.now();
    if (now < this.#next) return;
    this.#next = now + INTERVAL_MS;
    const perSecond = ((cycles - this.#before) * 1000) / (now - this.#started);
    // Loaded for runs that take long: it would make all the others start later.
    this.#show ??= line(this.#stream);
    const text = progressText(cycles, this.#total, perSecond);
    this.#show.then((show) => show(text));
  }

  /** Takes the line away. */
  clear(): void {
    this.#show?.then((show) => {
      show.clear();
      show.done();
    });
    this.#show = undefined;
  }
}

async function line(stream: NodeJS.WriteStream) {
  const { createLogUpdate } = await import('log-update');
  return createLogUpdate(stream);
}

/** One line: `12,000,000 of 50,000,000 cycles, 24 %, 8.10 million cycles/s, 5 s left`. */
export function progressText(cycles: number, total: number | undefined, perSecond: number): string {
  if (total === undefined) return `${counted(cycles, 'cycle')}, ${rateText(perSecond)}`;
  const percent = Math.floor((100 * cycles) / Math.max(1, total));
  const left = Math.ceil((total - cycles) / perSecond);
  return (
    `${figure(cycles)} of ${counted(total, 'cycle')}, ${percent} %, ` +
    `${rateText(perSecond)}, ${durationText(left)} left`
  );
}

/** Seconds as `42 s`, `3 min 5 s` or `2 h 10 min`. */
function durationText(seconds: number): string {
  if (seconds < 60) return `${seconds} s`;
  if (seconds < 3600) return `${Math.floor(seconds / 60)} min ${seconds % 60} s`;
  return `${Math.floor(seconds / 3600)} h ${Math.floor((seconds % 3600) / 60)} min`;
}
