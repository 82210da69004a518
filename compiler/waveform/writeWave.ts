import { WholeFile } from '../../runtime/node/wholeFile.js';
import type {
  Findings,
  Outlet,
  OutletBlock,
  OutletPlan,
  WatchedPlace,
} from '../run/outlets/outlet.js';
import type { SignalList } from './signalList.js';
import type { WaveForm, WaveRows, WaveSink, WaveWindow } from './wave.js';

/**
 * Writes the waves of some signals to a file, which appears when the run is over; it does not where
 * no cycle of the window is run. Cycles are numbered from `shift` on, 0 unless given.
 */
export function writeWave(
  path: string,
  form: WaveForm,
  list: SignalList,
  window: WaveWindow,
  shift = 0,
): OutletPlan {
  return {
    watch: list.nets,
    open: ({ design, watched }) =>
      new WaveOutlet(path, form({ design, list, window }), { window, shift }, watched),
  };
}

class WaveOutlet implements Outlet {
  readonly wantsResponse = true;
  readonly #file: WholeFile;
  readonly #sink: WaveSink;
  readonly #window: WaveWindow;
  readonly #shift: number;
  readonly #place: WatchedPlace;
  #cycles = 0;

  constructor(
    path: string,
    sink: WaveSink,
    { window, shift }: { readonly window: WaveWindow; readonly shift: number },
    place: WatchedPlace,
  ) {
    this.#file = new WholeFile(path);
    this.#sink = sink;
    this.#window = window;
    this.#shift = shift;
    this.#place = place;
  }

  take(block: OutletBlock): undefined {
    const rows = this.#inWindow(block);
    if (rows.cycles <= 0) return;
    if (this.#cycles === 0) this.#put(this.#sink.start());
    this.#put(this.#sink.rows(rows));
    this.#cycles += rows.cycles;
  }

  finish(): Findings {
    if (this.#cycles === 0) {
      return { notes: [`no cycle was run from cycle ${this.#window.from} on; no waves to write`] };
    }
    this.#put(this.#sink.end());
    return {};
  }

  keep(): void {
    if (this.#cycles > 0) this.#file.finish();
  }

  discard(): void {
    this.#file.discard();
  }

  #inWindow({ firstCycle, cycles, watched }: OutletBlock): WaveRows {
    const first = Math.max(firstCycle, this.#window.from);
    const end = Math.min(firstCycle + cycles, this.#window.to + 1);
    const rows = watched.subarray(Math.min(first - firstCycle, cycles) * this.#place.stride);
    const shown = first + this.#shift;
    return { firstCycle: shown, cycles: end - first, rows, place: this.#place };
  }

  #put(pieces: Iterable<Uint8Array>): void {
    for (const piece of pieces) this.#file.put(piece);
  }
}
