import type { LaneFault } from '../../runtime/laneEngine.js';
import type { Step } from './memberCourse.js';
import type { Continuation } from './repetition.js';

/**
 * What became of a state element:
 * `known`: the three-valued run knows it; `agreed`: it does not, but all lanes have the same value;
 * `powerUp`: lanes have different values; `undecided`: the three-valued run does not know it, and
 * fewer than two lanes are left to tell.
 */
export type Verdict = 'known' | 'agreed' | 'powerUp' | 'undecided';

/** All verdicts, those that need attention first. */
export const verdicts: readonly Verdict[] = ['powerUp', 'undecided', 'agreed', 'known'];

/** Two lanes with different values of one state element. */
export interface Witness {
  readonly lanes: readonly [number, number];
  readonly values: readonly [number, number];
  /** The number of cycles after which they differ, the last one seen. */
  readonly after: number;
}

/** A state element, as `settle --json` prints it. */
export interface ElementReport {
  readonly name: string;
  /** A `loop` is a net that a combinational loop keeps. */
  readonly kind: 'register' | 'latch' | 'loop';
  readonly verdict: Verdict;
  /** Cycles after which the three-valued run knows it until the end; for `known`. */
  readonly knownAfter?: number;
  /** Cycles after which all lanes agree until the end; for `known` and `agreed`. */
  readonly agreedAfter?: number;
  /** Its value at the end; for `known` and `agreed`. */
  readonly value?: number;
  /** For `powerUp`. */
  readonly witness?: Witness;
}

/** How a set of state elements went from cycle to cycle. */
export interface CourseReport {
  /** Cycles after which the set does not change any more until the end. */
  readonly unchangedAfter: number;
  /** Size of the set wherever it changes. */
  readonly steps: readonly Step[];
  /** How the states behind it go on with the inputs held; absent where that was not seen. */
  readonly held?: Continuation;
}

/** The power-up of a lane that is a witness. */
export interface LanePowerUp {
  readonly lane: number;
  /** The seed for `run --power-up random --seed`: decimal, for it may have 64 bits. */
  readonly seed: string;
  /** A digit 0 or 1 for each state element, in the order of `elements`. */
  readonly state: string;
}

/**
 * What a stimulus makes of an unknown power-up; printed as it stands by `settle --json`.
 *
 * Numbers of cycles count from 0, the power-up itself. "The end" is the state after the last
 * cycle, or, where the states were seen to repeat with the inputs held, the whole last period, or,
 * where a run was given up because bits went on changing, its last 256 cycles.
 */
export interface SettleReport {
  readonly circuit: string;
  readonly cycles: number;
  /** How many of the cycles the stimulus lasts; in the rest its last values hold. */
  readonly stimulusCycles: number;
  readonly lanes: number;
  /** Of lane 0; lane i has this seed + i. */
  readonly seed: string;
  readonly registers: number;
  readonly latches: number;
  readonly loopNets: number;
  /** State elements by verdict. */
  readonly counts: Readonly<Record<Verdict, number>>;
  /** The elements that are x in the three-valued run. */
  readonly unknown: CourseReport;
  /** The elements on which lanes differ. */
  readonly differing: CourseReport;
  readonly elements: readonly ElementReport[];
  /** Lanes that ended because a cycle has no result; they count no more from then on. */
  readonly faults: readonly (LaneFault & { readonly seed: string })[];
  /** Of all lanes that are witnesses. */
  readonly powerUps: readonly LanePowerUp[];
  readonly notes: readonly string[];
}

/** Whether there is nothing to find fault with: all elements are known, and no lane has ended. */
export const isAllKnown = ({ counts, elements, faults }: SettleReport): boolean =>
  counts.known === elements.length && faults.length === 0;
