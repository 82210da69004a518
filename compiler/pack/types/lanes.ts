import type { LaneCount } from '../../../runtime/laneLayout.js';
import {
  blockTypes,
  type Kinds,
  lastTypes,
  loadTypes,
  placeTypes,
  savedStateType,
} from './shared.js';

const ENDED =
  '; undefined for one that has ended and, where it would be read, has no result with its inputs';

/**
 * The declarations of a model of many sequences, whatever its ports are. `mayEnd` says whether a
 * cycle may have no result, so that a lane ends.
 */
export const laneTypes = (kinds: Kinds, lanes: LaneCount, mayEnd: boolean): string => {
  const { some } = kinds;
  return `${placeTypes}
${blockTypes(kinds, 'Column | readonly Column[]', 'readonly Uint32Array<ArrayBuffer>[]')
  .replace(
    '/** Inputs left',
    '/** A column for all lanes, or a list with one for each. Inputs left',
  )
  .replace('/** Entry k of a column is', '/** A column for each lane. Entry k of it is')}
/** How a run to a condition ended. */
export interface Reached {
  /** Whether it has held in all lanes. */
  readonly met: boolean;
  readonly cycles: number;
  /** For each lane after how many cycles it held first; undefined where it never did. */
  readonly first: readonly (number | undefined)[];
}

${savedStateType}
/** A value for each lane${mayEnd ? ENDED : ''}. */
export type EachLane<Value> = readonly ${mayEnd ? '(Value | undefined)' : 'Value'}[];

/** A lane that has ended because a cycle has no result, such as a loop that never settles. */
export interface LaneFault {
  readonly lane: number;
  /** The cycle without result. */
  readonly cycle: number;
  readonly message: string;
  /** FILE:LINE:COL in the netlist, where known. */
  readonly place: string;
}

/**
 * ${lanes} independent sequences of the circuit, lanes 0 to ${lanes - 1}, that tick together. Each has
 * inputs and a state of its own. Where a lane is left out, all of them are meant.
 *
 * It is always settled: \`read\` and \`peek\` show what follows from the present inputs and the state.
 * Misuse throws RangeError or TypeError with what was expected and what it got.
 */
export interface Model {
  readonly name: string;
  readonly lanes: ${lanes};
  /** Cycles since power-up, as lane 0 counts them. */
  readonly cycle: number;
  /** Lanes that have ended, in the order in which they did; the others go on. */
  readonly faults: readonly LaneFault[];
  readonly clocks: readonly Clock[];
  readonly inputs: readonly Port<keyof Inputs>[];
  readonly outputs: readonly Port<keyof Outputs>[];
  readonly nets: readonly Net[];
  /** None: lanes run no memories. */
  readonly memories: readonly Memory[];
  /** Gives inputs new values; those left out keep theirs. */
  write(values: ${some}<Inputs>, lane?: number): this;
  /** All outputs, or one port${mayEnd ? '. Throws RunFault for a lane that has ended' : ''}. */
  read(): { readonly [Output in keyof Outputs]: EachLane<Outputs[Output]> };
  read(lane: number): Outputs;
  read<Name extends keyof Ports>(name: Name): EachLane<Ports[Name]>;
  read<Name extends keyof Ports>(name: Name, lane: number): Ports[Name];
  /** Lets cycles pass (1 unless given) with the inputs as they are. */
  step(cycles?: number): this;
  /** Runs a block of cycles with new inputs in each, and records outputs. */
  run<Name extends keyof Outputs = keyof Outputs>(request: RunRequest<Name>): RunResult<Name>;
  /** Runs until outputs have had these values once in each lane; at most \`limit\` cycles. */
  runUntil(values: ${some}<Outputs>, limit: number): Reached;
  /** The value of a port, a register or a kept net. */
  peek<Name extends keyof Ports | keyof Nets>(name: Name): EachLane<(Ports & Nets)[Name]>;
  peek<Name extends keyof Ports | keyof Nets>(name: Name, lane: number): (Ports & Nets)[Name];
  /** Where lanes stand. A package of one sequence of the same netlist takes that too. */
  save(): EachLane<SavedState>;
  save(lane: number): SavedState;
  /** Goes to a saved state, given as an object or as JSON, or to one for each lane. */
  restore(state: SavedState | string | readonly (SavedState | string)[]): this;
  restore(state: SavedState | string, lane: number): this;
  /** Back to power-up: all inputs 0. */
  reset(lane?: number): this;
  /** Lets go of everything; later calls throw. */
  dispose(): void;
}

${loadTypes(kinds).replace(
  '/** Of random power-up. */',
  '/** Of random power-up: lane l starts with seed + l. */',
)}
${lastTypes}`;
};
