import type { BenchEngine, BenchResult } from '../benchResult.js';

/** What the figures were measured on. */
export interface Machine {
  readonly processor: string;
  readonly cores: number;
  readonly node: string;
  /** Programs that wanted the processor meanwhile, on average over a minute, at the end. */
  readonly load: number;
}

/** Measurements of several circuits; printed as it stands by `--json`. */
export interface BenchSuite {
  readonly machine: Machine;
  readonly circuits: readonly BenchResult[];
  /** Geometric means over the circuits that have both figures. */
  readonly means: SuiteMeans;
}

/** Each is a time of native C over a time of ours, so that more is better for ours. */
export interface SuiteMeans {
  /** `native` over `wasm`. */
  readonly straightLine?: number;
  /** `native` over what a run uses: `table` where there is one, else `wasm`. */
  readonly asRun?: number;
  /** `nativeMarch` over `wasm`. */
  readonly straightLineMarch?: number;
}

/** Puts measurements together. */
export function benchSuite(machine: Machine, circuits: readonly BenchResult[]): BenchSuite {
  const means = {
    straightLine: meanOf(circuits, (result) => speedOver(result, 'native', 'wasm')),
    asRun: meanOf(circuits, (result) => speedOver(result, 'native', usedBy(result))),
    straightLineMarch: meanOf(circuits, (result) => speedOver(result, 'nativeMarch', 'wasm')),
  };
  const known = Object.entries(means).filter(([, mean]) => mean !== undefined);
  return { machine, circuits, means: Object.fromEntries(known) };
}

/** The engine that a run of the circuit uses. */
export const usedBy = ({ engines }: BenchResult): BenchEngine =>
  engines.table === undefined ? 'wasm' : 'table';

/**
 * How many times as fast as engine `slow` engine `fast` is, in the best bursts of both, which other
 * programs disturb least; undefined unless both were measured.
 */
export function speedOver(
  { engines }: BenchResult,
  slow: BenchEngine,
  fast: BenchEngine,
): number | undefined {
  const [of, than] = [engines[slow], engines[fast]];
  return of && than && of.best / than.best;
}

function meanOf(
  circuits: readonly BenchResult[],
  ratioOf: (result: BenchResult) => number | undefined,
): number | undefined {
  const ratios = circuits.map(ratioOf).filter((ratio) => ratio !== undefined);
  if (ratios.length === 0) return undefined;
  const logarithms = ratios.reduce((sum, ratio) => sum + Math.log(ratio), 0);
  return Number(Math.exp(logarithms / ratios.length).toPrecision(4));
}
