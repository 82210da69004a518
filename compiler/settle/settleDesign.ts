import type { StimulusBlock } from '../../runtime/stream.js';
import type { Design } from '../compile.js';
import { Progress } from '../run/progress.js';
import { chooseLanes } from './lanes/chooseLanes.js';
import { reportOf } from './reportOf.js';
import type { SettleReport } from './settleReport.js';
import { SettleRun } from './settleRun.js';

/** What to run, and from how many power-ups. */
export interface SettleRequest {
  /** Two-valued rows. */
  readonly stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>;
  /**
   * How long; a longer stimulus is cut, the last row of a shorter one is held (0 if there is none).
   *
   * Unless given: the length of the stimulus, and then, with its last row held, until the states
   * of all runs are seen to repeat, or until nothing has become known or unknown for
   * `QUIET_CYCLES`, but at most `MOST_HELD_CYCLES`.
   */
  readonly cycles?: number;
  /** Random power-ups: 2 to `MOST_LANES`. */
  readonly lanes: number;
  /** Of lane 0; lane i has seed + i. */
  readonly seed: number | bigint;
  /** Notes for the report. */
  readonly notes?: readonly string[];
}

/** The most power-ups that are run side by side. */
export const MOST_LANES = 65536;

/** Held cycles without a change after which none is waited for any more. */
export const QUIET_CYCLES = 256;

/** Held cycles that are run at most, unless a number of cycles is asked for. */
export const MOST_HELD_CYCLES = 4096;

/**
 * Runs a two-valued design from unknown and from random power-ups, and reports what becomes of
 * each state element.
 *
 * The three-valued run proves what it knows, and knows too little where x meets x. The lanes show
 * what really differs, and are a sample where they agree. Throws RangeError for a three-valued
 * design, for one with memories (words that are no registers) and for lanes and cycles that are no
 * such counts, and what the stimulus throws.
 */
export async function settleDesign(design: Design, request: SettleRequest): Promise<SettleReport> {
  checkRequest(design, request);
  const { cycles, lanes, seed } = request;
  const run = new SettleRun(design, await chooseLanes(design, lanes), lanes, BigInt(seed));
  const progress = new Progress(cycles);
  try {
    const row = await followStimulus(run, design, request, progress);
    const stimulusCycles = run.cycles;
    while (goesOn(run, stimulusCycles, cycles)) {
      // The very first cycle has none before it with the same inputs.
      run.run(row, 0, run.cycles > 0);
      progress.update(run.cycles);
    }
    const isRestless = cycles === undefined && run.cycles - stimulusCycles === MOST_HELD_CYCLES;
    const endCycles = isRestless ? QUIET_CYCLES : 1;
    return reportOf(design, run, { ...request, stimulusCycles, endCycles });
  } finally {
    progress.clear();
  }
}

function checkRequest({ layout }: Design, { lanes, cycles }: SettleRequest): void {
  if (layout.threeValued) throw new RangeError('the design must be two-valued');
  if (layout.memories.length > 0) throw new RangeError('the design must have no memories');
  if (!Number.isSafeInteger(lanes) || lanes < 2 || lanes > MOST_LANES) {
    throw new RangeError(`lanes are 2 to ${MOST_LANES}, got ${lanes}`);
  }
  if (cycles !== undefined && (!Number.isSafeInteger(cycles) || cycles < 0)) {
    throw new RangeError(`cycles is a count, got ${cycles}`);
  }
}

/** Runs through the stimulus; returns its last row. */
async function followStimulus(
  run: SettleRun,
  { layout }: Design,
  { stimulus, cycles: wanted }: SettleRequest,
  progress: Progress,
): Promise<Uint32Array> {
  const last = new Uint32Array(layout.inputs.words);
  for await (const { cycles, rows, stride } of stimulus) {
    for (let i = 0; i < cycles; i++) {
      if (run.cycles === wanted) return last;
      run.run(rows, i * stride, false);
      progress.update(run.cycles);
    }
    // Kept now: the maker of the block may use the array again.
    const at = (cycles - 1) * stride;
    last.set(rows.subarray(at, at + last.length));
  }
  return last;
}

function goesOn(run: SettleRun, stimulusCycles: number, wanted: number | undefined): boolean {
  if (wanted !== undefined) return run.cycles < wanted;
  const isRepeated = run.unknownRepetition.found && run.laneRepetition.found;
  if (isRepeated || run.cycles - stimulusCycles >= MOST_HELD_CYCLES) return false;
  return run.cycles - Math.max(stimulusCycles, run.unchangedAfter) < QUIET_CYCLES;
}
