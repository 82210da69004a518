import { join } from 'node:path';
import { setImmediate } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import type { Design } from '../compile.js';
import { BLOCK_CYCLES, type CheckRequest, type Comparison, SEED } from './comparison.js';
import { LaneComparison } from './laneComparison.js';
import { SingleComparison } from './singleComparison.js';

export { PackageDeparture } from './comparison.js';

/** What was compared before a package was written. */
export interface PackageCheck {
  /** The engine that the package agrees with. */
  readonly engine: 'reference';
  /** Cycles of random inputs that were compared in any case, on whatever machine. */
  readonly cycles: number;
  /** Of the inputs, as of `run --random`; inputs that reset act in two cycles, then in one of 256. */
  readonly seed: number;
  /** In how many of the cycles all outputs and kept nets were read one by one. */
  readonly read: number;
  readonly nets: number;
  /** Lanes that were compared, each with inputs of its own; absent where there is one sequence. */
  readonly lanes?: readonly number[];
}

const WANTED_CYCLES = 10_000;
const ENOUGH_MS = 5000;
/** Nets times cycles that the reference does in about the time that is enough. */
const AFFORDED = 2e8;
const PAUSE_MS = 50;
const READ_CYCLES = 48;
const MOST_FAULTS = 200;

/**
 * Runs the package in a folder, by its own `model.mjs`, beside the reference interpreter: the first
 * cycles step by step with every output and kept net read, the others as blocks, at last from a
 * saved state. At least 10,000 cycles or five seconds; of many lanes several are compared, while all
 * get inputs of their own. Throws `PackageDeparture`.
 *
 * The cycles it tells of depend on the netlist alone; on a fast machine a large one gets more.
 */
export async function checkPackage(folder: string, request: CheckRequest): Promise<PackageCheck> {
  const { lanes = 1 } = request;
  const module = await import(pathToFileURL(join(folder, 'model.mjs')).href);
  const kind = lanes === 1 ? SingleComparison : LaneComparison;
  const beside: Comparison = await kind.of(module, request);
  const planned = plannedCycles(request.design, beside.lanes?.length ?? 1);
  const read = Math.min(READ_CYCLES, planned);
  beside.readEach(read);
  const started = performance.now();
  let nextPause = started + PAUSE_MS;
  while (beside.cycles < WANTED_CYCLES && beside.faults < MOST_FAULTS) {
    const isEnough = performance.now() - started > ENOUGH_MS;
    if (isEnough && beside.cycles >= planned) break;
    beside.runBlock(Math.min(BLOCK_CYCLES, WANTED_CYCLES - beside.cycles));
    request.onProgress?.(beside.cycles, WANTED_CYCLES);
    // Without a pause no signal is handled.
    if (performance.now() > nextPause) {
      await setImmediate();
      nextPause = performance.now() + PAUSE_MS;
    }
  }
  await beside.goOn();
  const cycles = Math.min(planned, beside.cycles);
  const nets = request.kept.nets.length;
  const compared = beside.lanes && { lanes: beside.lanes };
  return { engine: 'reference', cycles, seed: SEED, read, nets, ...compared };
}

/** Cycles that are compared in any case: fewer where the netlist is large. */
const plannedCycles = ({ circuit }: Design, sequences: number): number =>
  Math.max(
    16,
    Math.min(WANTED_CYCLES, Math.floor(AFFORDED / sequences / Math.max(1, circuit.netCount))),
  );
