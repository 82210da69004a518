import type { Engine } from '../../../runtime/engine.js';
import type { RunBlock } from '../../../runtime/stream.js';
import type { Design } from '../../compile.js';
import type { RunStart } from '../runRecorder.js';
import type { RunSummary } from '../runSummary.js';
import type { WatchedNets } from '../watchedNets.js';
import type { Findings, Outlet, OutletPlan, RunEnd } from './outlet.js';

/** Thrown where moments of a run are to be kept and what it is for cannot go on from one. */
export class CannotGoOn extends Error {
  constructor() {
    super(
      'a stimulus that looks back at the response, or an expectation that is computed, depends on ' +
        'all that went before: such a run cannot be gone on with',
    );
    this.name = 'CannotGoOn';
  }
}

/** All outlets of a run, as one. */
export class Outlets {
  /** Cycles that count so far. */
  cycles = 0;
  /** Set when an outlet has ended the run. */
  stopped: RunSummary['stopped'];
  readonly #outlets: Outlet[] = [];
  readonly #nets: WatchedNets;

  private constructor(nets: WatchedNets) {
    this.#nets = nets;
  }

  /** Opens outlets in their order; if one throws, none is left open. */
  static async open(
    plans: readonly OutletPlan[],
    design: Design,
    engine: Engine,
    nets: WatchedNets,
    from?: RunStart,
  ): Promise<Outlets> {
    const outlets = new Outlets(nets);
    outlets.cycles = from?.cycle ?? 0;
    try {
      for (const [i, plan] of plans.entries()) {
        const context = { design, engine, watched: nets.placeOf(i), saved: from?.outlets[i] };
        outlets.#outlets.push(await plan.open(context));
      }
    } catch (error) {
      outlets.discard();
      throw error;
    }
    return outlets;
  }

  get wantResponse(): boolean {
    return this.#outlets.some(({ wantsResponse }) => wantsResponse);
  }

  /** Whether nobody wants to know more. */
  get areSatisfied(): boolean {
    const wish = this.#outlets.map(({ interest }) => interest);
    return wish.includes('lost') && !wish.includes(undefined);
  }

  /** What each of them has to keep. Throws `CannotGoOn` for one that lacks `save`. */
  save(): unknown[] {
    return this.#outlets.map((outlet) => {
      if (outlet.save === undefined) throw new CannotGoOn();
      return outlet.save();
    });
  }

  /** Hands a block to each of them, cut by those before. */
  async take(block: RunBlock): Promise<void> {
    const { firstCycle } = block;
    let cut = this.#nets.split(block);
    for (const outlet of this.#outlets) {
      const taken = outlet.take(cut);
      // Waiting for what is there already would cost more than most outlets do.
      const stop = taken instanceof Promise ? await taken : taken;
      if (stop === undefined) continue;
      cut = this.#nets.cut(cut, stop.lastCycle - firstCycle + 1);
      const { lastCycle: cycle, ...why } = stop;
      this.stopped = { cycle, ...why };
    }
    this.cycles = firstCycle + cut.cycles;
  }

  /** Completes all of them; returns what they found, notes joined. */
  async finish(end: RunEnd): Promise<Findings & { readonly notes: readonly string[] }> {
    const notes: string[] = [];
    let findings: Findings = {};
    for (const outlet of this.#outlets) {
      const found = await outlet.finish(end);
      findings = joined(findings, found);
      notes.push(...(found.notes ?? []));
    }
    for (const outlet of this.#outlets) outlet.keep?.();
    return { ...findings, notes };
  }

  discard(): void {
    for (const outlet of this.#outlets) outlet.discard();
  }
}

// Several may compare: the departures of all are counted, and the earliest is the one to tell.
function joined(before: Findings, found: Findings): Findings {
  const [first, second] = [before.mismatch, found.mismatch];
  const earliest = first && second && first.cycle <= second.cycle ? first : (second ?? first);
  const counts = [before.mismatches, found.mismatches].filter((count) => count !== undefined);
  return {
    ...before,
    ...found,
    ...(earliest && { mismatch: earliest }),
    ...(counts.length > 0 && { mismatches: counts.reduce((sum, count) => sum + count, 0) }),
  };
}
