import { WholeFile } from '../../runtime/node/wholeFile.js';
import type { Design } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import type {
  Findings,
  Outlet,
  OutletBlock,
  OutletContext,
  OutletPlan,
} from '../run/outlets/outlet.js';
import type { SignalList } from '../waveform/signalList.js';
import type { WaveWindow } from '../waveform/wave.js';
import { ActivityCounter } from './activityCounter.js';
import { ActivityCourse, type SavedCourse } from './activityCourse.js';
import { type ActivityGroup, activityGroups } from './activityGroups.js';
import { NetActivity } from './netActivity.js';
import { type ObservedNets, observedNets } from './observedNets.js';
import { activityPicture } from './picture/activityPicture.js';
import { summaryOf } from './summaryOf.js';

/** A form in which activity is written, piece by piece. */
export type ActivityForm = (activity: NetActivity) => Iterable<Uint8Array>;

/** What is counted, and what becomes of it. */
export interface ActivityRequest {
  readonly list: SignalList;
  readonly window: WaveWindow;
  /** A file and its form. */
  readonly file?: { readonly path: string; readonly form: ActivityForm };
  /** Where a picture goes. */
  readonly picture?: string;
  /** An emitter that has been started before. */
  readonly emitter?: Emitter;
}

/** What counting keeps to go on later. */
interface SavedActivity {
  readonly cycles: number;
  readonly counts: Uint8Array;
  readonly course: SavedCourse | null;
}

/**
 * Counts the toggles of nets and the time that they are at 1, exactly: `RunSummary.activity`, and
 * files, which appear when the run is over.
 */
export function countActivity(design: Design, request: ActivityRequest): OutletPlan {
  const observed = observedNets(design, request.list.nets);
  return {
    watch: observed.sources,
    open: async (context) => {
      const counter = await ActivityCounter.create(observed, context.watched, request.emitter);
      return new ActivityOutlet(request, observed, counter, context);
    },
  };
}

class ActivityOutlet implements Outlet {
  readonly wantsResponse = true;
  readonly #request: ActivityRequest;
  readonly #observed: ObservedNets;
  readonly #counter: ActivityCounter;
  readonly #context: OutletContext;
  readonly #groups: readonly ActivityGroup[];
  readonly #course: ActivityCourse | undefined;
  readonly #file: WholeFile | undefined;
  readonly #picture: WholeFile | undefined;
  /** Cycles taken. */
  #cycles = 0;

  constructor(
    request: ActivityRequest,
    observed: ObservedNets,
    counter: ActivityCounter,
    context: OutletContext,
  ) {
    const { list, file, picture } = request;
    this.#request = request;
    this.#observed = observed;
    this.#counter = counter;
    this.#context = context;
    const saved = context.saved as SavedActivity | undefined;
    if (saved !== undefined) {
      counter.restore(saved.cycles, saved.counts);
      this.#cycles = saved.cycles;
    }
    this.#groups = picture === undefined ? [] : activityGroups(context.design, list, observed);
    if (picture !== undefined) {
      this.#course = new ActivityCourse(this.#groups, saved?.course ?? undefined);
    }
    try {
      if (file !== undefined) this.#file = new WholeFile(file.path);
      if (picture !== undefined) this.#picture = new WholeFile(picture);
    } catch (error) {
      this.discard();
      throw error;
    }
  }

  save(): SavedActivity {
    const counts = this.#counter.save();
    return { cycles: this.#cycles, counts, course: this.#course?.save() ?? null };
  }

  take({ firstCycle, cycles, watched }: OutletBlock): undefined {
    const { from, to } = this.#request.window;
    const end = Math.min(cycles, to + 1 - firstCycle);
    for (let row = Math.max(0, from - firstCycle); row < end; ) {
      const step = Math.min(end - row, this.#course?.left(this.#cycles) ?? end);
      this.#counter.add(watched, row, step);
      row += step;
      this.#cycles += step;
      if (this.#course?.left(this.#cycles) === this.#course?.width) this.#endRange();
    }
  }

  finish(): Findings {
    const { list, window, file, picture } = this.#request;
    const { design } = this.#context;
    if (this.#cycles === 0) {
      return { notes: [`no cycle was run from cycle ${window.from} on; no activity to write`] };
    }
    this.#counter.flush();
    const activity = new NetActivity({ design, list }, this.#observed, this.#counter, window.from);
    for (const piece of file?.form(activity) ?? []) this.#file!.put(piece);
    if (picture !== undefined) {
      if (this.#course!.left(this.#cycles) < this.#course!.width) this.#endRange();
      const drawn = activityPicture({
        ...{ circuit: design.circuit.name, first: window.from, cycles: this.#cycles },
        ...{ width: this.#course!.width, ranges: this.#course!.ranges, groups: this.#groups },
      });
      this.#picture!.put(new TextEncoder().encode(drawn));
    }
    return { activity: summaryOf(activity) };
  }

  keep(): void {
    if (this.#cycles === 0) return;
    this.#file?.finish();
    this.#picture?.finish();
  }

  discard(): void {
    this.#file?.discard();
    this.#picture?.discard();
  }

  #endRange(): void {
    if (this.#course === undefined) return;
    this.#counter.flush();
    this.#course.end(this.#counter);
  }
}
