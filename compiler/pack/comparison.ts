import type { LaneCount } from '../../runtime/laneLayout.js';
import type { Design } from '../compile.js';
import type { KeptNets } from './keptNets.js';
import type { ResetPort } from './resets.js';

/** Of the first lane's inputs; lane l has seed + l. */
export const SEED = 1;

/** Cycles of a block. */
export const BLOCK_CYCLES = 64;

/** What a package is compared with, and how long. */
export interface CheckRequest {
  readonly design: Design;
  readonly kept: KeptNets;
  /** 1 unless given. */
  readonly lanes?: 1 | LaneCount;
  readonly resets: readonly ResetPort[];
  /** Told how many cycles have been compared, of how many. */
  readonly onProgress?: (cycles: number, of: number) => void;
}

/** Thrown where a package departs from the reference. */
export class PackageDeparture extends Error {}

/** A package beside the reference. Every method throws `PackageDeparture`. */
export interface Comparison {
  /** Cycles that have been compared. */
  readonly cycles: number;
  /** How often both have come to a cycle without result, and started again. */
  readonly faults: number;
  /** Lanes that are compared; undefined where there is one sequence. */
  readonly lanes?: readonly number[];
  /** Writes inputs, looks at everything, lets one cycle pass, and so on. */
  readEach(cycles: number): void;
  /** Runs a block of cycles on typed arrays. */
  runBlock(cycles: number): void;
  /** Some more cycles on another instance, from the saved state of the one before. */
  goOn(): Promise<void>;
}
