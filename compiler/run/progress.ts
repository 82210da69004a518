import { createLogUpdate } from 'log-update';
import { count, rateText } from './runSummary.js';

/** A run that takes no longer shows no progress. */
const QUIET_MS = 1000;
const INTERVAL_MS = 200;

/** Shows on a terminal how far a run is: cycles, rate, time left. Elsewhere it shows nothing. */
export class Progress {
  readonly #started = performance.now();
  readonly #show: ReturnType<typeof createLogUpdate> | undefined;
  readonly #total: number | undefined;
  #next = this.#started + QUIET_MS;

  /** `total` is the number of cycles wanted, where that is known. */
  constructor(total: number | undefined, stream: NodeJS.WriteStream = process.stderr) {
    this.#total = total;
    if (stream.isTTY) this.#show = createLogUpdate(stream);
  }

  /** Call it often: it shows something a few times a second. */
  update(cycles: number): void {
    if (this.#show === undefined) return;
    const now = performance.now();
    if (now < this.#next) return;
    this.#next = now + INTERVAL_MS;
    const perSecond = (cycles * 1000) / (now - this.#started);
    this.#show(progressText(cycles, this.#total, perSecond));
  }

  /** Takes the line away. */
  clear(): void {
    this.#show?.clear();
    this.#show?.done();
  }
}

/** One line: `12,000,000 of 50,000,000 cycles, 24 %, 8.10 million cycles/s, 5 s left`. */
export function progressText(cycles: number, total: number | undefined, perSecond: number): string {
  if (total === undefined) return `${count(cycles)} cycles, ${rateText(perSecond)}`;
  const percent = Math.floor((100 * cycles) / Math.max(1, total));
  const left = Math.ceil((total - cycles) / perSecond);
  return (
    `${count(cycles)} of ${count(total)} cycles, ${percent} %, ` +
    `${rateText(perSecond)}, ${durationText(left)} left`
  );
}

/** Seconds as `42 s`, `3 min 5 s` or `2 h 10 min`. */
function durationText(seconds: number): string {
  if (seconds < 60) return `${seconds} s`;
  if (seconds < 3600) return `${Math.floor(seconds / 60)} min ${seconds % 60} s`;
  return `${Math.floor(seconds / 3600)} h ${Math.floor((seconds % 3600) / 60)} min`;
}
