import { setImmediate } from 'node:timers/promises';
import type { Engine } from '../../runtime/engine.js';
import { ResponseWriter } from '../../runtime/node/index.js';
import { Signature } from '../../runtime/signature.js';
import { type ResponseBlock, runBlocks, type StimulusBlock } from '../../runtime/stream.js';
import { type PowerUp, powerUpState } from '../circuit/powerUp.js';
import type { Design } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import { createEngine, type EngineName } from '../engines.js';
import { BusWatch } from './busWatch.js';
import { Departures } from './departures.js';
import { Progress } from './progress.js';
import { INTERRUPTED, type RunSummary } from './runSummary.js';

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
  /** Files for the response and of the expectation. */
  readonly response?: string;
  readonly expect?: string;
  /** Goes on after a departure. */
  readonly all?: boolean;
  readonly signature?: boolean;
  /** Notes for the summary. */
  readonly notes?: readonly string[];
  /** Aborted by Ctrl-C: the run ends after the block at hand. */
  readonly interrupt?: AbortSignal;
  /** Called when the first cycles are done, so that the tables can be read at least there. */
  readonly onStart?: () => void;
  /** Told each departure as it is found. */
  readonly onDeparture?: (text: string) => void;
  /** An emitter that has been started before, to be ready. */
  readonly emitter?: Emitter;
}

/**
 * Runs a design over a stimulus in constant memory: writes the response, compares it with an
 * expectation, signs it.
 *
 * The response file appears when the run is over, up to the last cycle run. It does not appear
 * where the run throws: `TableError` for a bad table, `RunFault` for a cycle without result.
 */
export async function runDesign(design: Design, request: RunRequest): Promise<RunSummary> {
  const { layout, circuit } = design;
  const watch = BusWatch.of(design);
  const engine = await createEngine(watch?.design ?? design, request.engine, request.emitter);
  engine.reset(powerUpState(circuit, request.powerUp, request.seed));
  const outlets = await Outlets.open(design, request);
  const progress = new Progress(request.cycles);
  const started = performance.now();
  let nextPause = started + PAUSE_MS;
  try {
    for await (const block of runBlocks(engine, request.stimulus, {
      ...(request.cycles !== undefined && { cycles: request.cycles }),
      response: outlets.areWanted || watch !== undefined,
    })) {
      const taken = await outlets.take(watch?.ownPart(block) ?? block);
      watch?.look(block, taken);
      if (block.firstCycle === 0) request.onStart?.();
      progress.update(outlets.cycles);
      // Without a pause no event is handled, and an interrupt is one.
      if (performance.now() > nextPause) {
        await setImmediate();
        nextPause = performance.now() + PAUSE_MS;
      }
      if (outlets.isEnough || request.interrupt?.aborted) break;
    }
    progress.clear();
    const seconds = (performance.now() - started) / 1000;
    await outlets.finish();
    const summary = summaryOf(request, outlets, seconds, layout.threeValued ? engine : undefined);
    return { ...summary, ...(watch && { buses: watch.events() }) };
  } finally {
    progress.clear();
    outlets.discard();
  }
}

function summaryOf(
  request: RunRequest,
  outlets: Outlets,
  seconds: number,
  threeValued: Engine | undefined,
): RunSummary {
  const { cycles, signature, departures } = outlets;
  const isInterrupted = request.interrupt?.aborted && cycles !== request.cycles;
  const isDeparted = outlets.isEnough && departures?.first !== undefined;
  const reason = isInterrupted ? INTERRUPTED : isDeparted ? 'departs from the expectation' : '';
  return {
    cycles,
    seconds,
    cyclesPerSecond: cycles / Math.max(seconds, 1e-9),
    engine: request.engine,
    powerUp: request.powerUp,
    ...(signature && { signature: signature.digits() }),
    ...(departures?.first && { mismatch: departures.first }),
    ...(request.all && departures && { mismatches: departures.count }),
    ...(reason !== '' && { stopped: { cycle: isDeparted ? cycles - 1 : cycles, reason } }),
    ...(threeValued && { unknownRegisters: unknownNames(threeValued) }),
    notes: [...(request.notes ?? []), ...outlets.notes],
  };
}

function unknownNames(engine: Engine): string[] {
  const state = engine.state();
  return engine.layout.stateNames.filter((_, element) => state[element] === 2);
}

/** Where the response goes. */
class Outlets {
  cycles = 0;
  isEnough = false;
  readonly notes: string[] = [];
  readonly signature: Signature | undefined;
  readonly departures: Departures | undefined;
  readonly #writer: ResponseWriter | undefined;

  private constructor(
    writer: ResponseWriter | undefined,
    departures: Departures | undefined,
    signature: Signature | undefined,
  ) {
    this.#writer = writer;
    this.departures = departures;
    this.signature = signature;
  }

  static async open({ layout }: Design, request: RunRequest): Promise<Outlets> {
    const departures =
      request.expect === undefined
        ? undefined
        : await Departures.open(request.expect, layout, request);
    const writer =
      request.response === undefined ? undefined : new ResponseWriter(request.response, layout);
    return new Outlets(writer, departures, request.signature ? new Signature(layout) : undefined);
  }

  get areWanted(): boolean {
    return (this.#writer ?? this.departures ?? this.signature) !== undefined;
  }

  /** Takes a block; returns how many of its cycles count. */
  async take(block: ResponseBlock): Promise<number> {
    const last = await this.departures?.check(block);
    if (last !== undefined) this.isEnough = true;
    // What follows the departure was run, but was not asked for.
    const cycles = last === undefined ? block.cycles : last - block.firstCycle + 1;
    this.signature?.add(block.rows, cycles);
    this.#writer?.write({ ...block, cycles });
    this.cycles = block.firstCycle + cycles;
    return cycles;
  }

  async finish(): Promise<void> {
    const unreached = await this.departures?.finish();
    if (unreached !== undefined && !this.isEnough) {
      this.notes.push(`the expectation goes on at cycle ${unreached}, which was not run`);
    }
    this.#writer?.finish();
  }

  discard(): void {
    this.#writer?.discard();
  }
}
