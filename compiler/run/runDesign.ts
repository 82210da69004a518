import { setImmediate } from 'node:timers/promises';
import type { Engine } from '../../runtime/engine.js';
import { runBlocks, type StimulusBlock } from '../../runtime/stream.js';
import { StartingEngine } from '../background/startingEngine.js';
import type { ModelCache } from '../cache/modelCache.js';
import { type PowerUp, powerUpState } from '../circuit/powerUp.js';
import { powerUpMemories } from '../circuit/powerUpMemory.js';
import type { Design } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import type { EngineName } from '../engines.js';
import { watchBuses } from './outlets/busWatch.js';
import type { OutletPlan } from './outlets/outlet.js';
import { Outlets } from './outlets/outlets.js';
import { Progress } from './progress.js';
import { runEngine } from './runEngine.js';
import type { RunRecorder, RunStart } from './runRecorder.js';
import { INTERRUPTED, type RunSummary } from './runSummary.js';
import { WatchedNets } from './watchedNets.js';

/** How long a run may keep events waiting. */
const PAUSE_MS = 50;

/** What to run and what to do with the response. */
export interface RunRequest {
  readonly stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>;
  /** The length of the stimulus unless given. */
  readonly cycles?: number;
  readonly engine: EngineName;
  readonly powerUp: PowerUp;
  /** Of random power-up. */
  readonly seed: number | bigint;
  /** Where the response goes, those that judge it first; nowhere unless given. */
  readonly outlets?: readonly OutletPlan[];
  /** Notes for the summary. */
  readonly notes?: readonly string[];
  /** Aborted by Ctrl-C: the run ends after the block at hand. */
  readonly interrupt?: AbortSignal;
  /** Goes on from there; the stimulus is what is left of it. From power-up unless given. */
  readonly from?: RunStart;
  /** Keeps moments to go on from. */
  readonly recorder?: RunRecorder;
  /** Called when the first cycles are done, so that the tables can be read at least there. */
  readonly onStart?: () => void;
  /** An emitter that has been started before, to be ready. */
  readonly emitter?: Emitter;
  /** Models of the design's circuit that were compiled before. */
  readonly models?: ModelCache;
}

/**
 * Runs a design over a stimulus in constant memory, and hands the response to outlets.
 *
 * Files appear when the run is over, up to the last cycle that counts. They do not appear where the
 * run throws: `TableError` for a bad table, `RunFault` for a cycle without result.
 */
export async function runDesign(design: Design, request: RunRequest): Promise<RunSummary> {
  const plans = [...(request.outlets ?? []), ...watchBuses(design)];
  const nets = new WatchedNets(design, plans);
  const start = powerUpState(design.circuit, request.powerUp, request.seed);
  const marks = plans.some((plan) => plan.marks === true);
  const engine = await runEngine(nets.design, { ...request, marks, start });
  if (request.from === undefined) {
    engine.reset(start);
    powerUpMemories(engine, design.circuit, request.powerUp, request.seed);
  } else engine.restore(request.from.point);
  const outlets = await Outlets.open(plans, design, engine, nets, request.from);
  const progress = new Progress(request.cycles, request.from?.cycle);
  const moment = (): RunStart => ({
    cycle: outlets.cycles,
    point: { ...engine.save(), position: outlets.cycles % design.schedule.pattern.length },
    outlets: outlets.save(),
  });
  try {
    await request.recorder?.begin(moment);
    const started = performance.now();
    await runInto(outlets, engine, request, progress, moment);
    progress.clear();
    const seconds = (performance.now() - started) / 1000;
    const { cycles } = outlets;
    const stopped = outlets.stopped ?? interruption(request, cycles);
    // The engine of a run that an outlet has ended may have gone further.
    const last = request.recorder && outlets.stopped === undefined ? moment() : undefined;
    const { notes, ...findings } = await outlets.finish({ cycles, stopped, engine });
    const done = cycles - (request.from?.cycle ?? 0);
    const summary = {
      cycles,
      seconds,
      cyclesPerSecond: done / Math.max(seconds, 1e-9),
      engine: request.engine,
      powerUp: request.powerUp,
      ...findings,
      ...(stopped && { stopped }),
      ...(design.layout.threeValued && { unknownRegisters: unknownNames(engine) }),
      notes: [...(request.notes ?? []), ...notes],
    };
    const more = await request.recorder?.end(summary, last);
    return more === undefined ? summary : { ...summary, notes: [...summary.notes, ...more] };
  } finally {
    progress.clear();
    outlets.discard();
  }
}

async function runInto(
  outlets: Outlets,
  engine: Engine,
  request: RunRequest,
  progress: Progress,
  moment: () => RunStart,
): Promise<void> {
  const from = request.from && { cycle: request.from.cycle, before: request.from.point.before };
  let nextPause = performance.now() + PAUSE_MS;
  for await (const block of runBlocks(engine, request.stimulus, {
    ...(request.cycles !== undefined && { cycles: request.cycles }),
    response: outlets.wantResponse,
    ...(engine instanceof StartingEngine && { pieceCycles: () => engine.pieceCycles }),
    ...(from && { from }),
  })) {
    await outlets.take(block);
    if (block.firstCycle === (from?.cycle ?? 0)) request.onStart?.();
    progress.update(outlets.cycles);
    // Without a pause no event is handled, and an interrupt is one.
    if (performance.now() > nextPause) {
      await setImmediate();
      nextPause = performance.now() + PAUSE_MS;
    }
    if (outlets.stopped || outlets.areSatisfied || request.interrupt?.aborted) return;
    const recorded = request.recorder?.after(moment);
    if (recorded instanceof Promise) await recorded;
  }
}

function interruption({ interrupt, cycles: wanted }: RunRequest, cycles: number) {
  if (!interrupt?.aborted || cycles === wanted) return undefined;
  return { cycle: cycles, reason: INTERRUPTED };
}

function unknownNames(engine: Engine): string[] {
  const state = engine.state();
  return engine.layout.stateNames.filter((_, element) => state[element] === 2);
}
