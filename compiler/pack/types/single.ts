import {
  blockTypes,
  type Kinds,
  lastTypes,
  loadTypes,
  placeTypes,
  savedStateType,
} from './shared.js';

/** The declarations of a model of one sequence, whatever its ports are. */
export const modelTypes = (kinds: Kinds): string => {
  const { threeValued, some } = kinds;
  return `${placeTypes}
${blockTypes(kinds, 'Column', 'Uint32Array<ArrayBuffer>')}
/** How a run to a condition ended: whether it holds, and how many cycles passed. */
export interface Reached {
  readonly met: boolean;
  readonly cycles: number;
}

${savedStateType}
/** Told which ports have changed since it was told last. */
export type ChangeListener = (changes: Readonly<Partial<Ports>>, cycle: number) => void;

/** What a model in this thread and one in a worker have in common. */
interface About {
  readonly name: string;
  /** Cycles since power-up${'; in a worker, as of the last answer'}. */
  readonly cycle: number;
  readonly clocks: readonly Clock[];
  readonly inputs: readonly Port<keyof Inputs>[];
  readonly outputs: readonly Port<keyof Outputs>[];
  readonly nets: readonly Net[];
  readonly memories: readonly Memory[];
  /** 32-bit words of a packed row${threeValued ? ': values, then which bits are x' : ''}. */
  readonly inputWords: number;
  readonly outputWords: number;
}

/**
 * The circuit at work. It is always settled: \`read\` and \`peek\` show what follows from the present
 * inputs and the state. \`step\` lets the clock tick.
 *
 * Misuse throws RangeError or TypeError with what was expected and what it got.
 */
export interface Model extends About {
  /** Gives inputs new values; those left out keep theirs. */
  write(values: ${some}<Inputs>): this;
  /** All outputs, or the value of one port. */
  read(): Outputs;
  read<Name extends keyof Ports>(name: Name): Ports[Name];
  /** Lets cycles pass (1 unless given) with the inputs as they are. */
  step(cycles?: number): this;
  /** Runs a block of cycles with new inputs in each, and records outputs. */
  run<Name extends keyof Outputs = keyof Outputs>(request: RunRequest<Name>): RunResult<Name>;
  /** The same on packed rows; with \`stride\` 0 the one row holds for all cycles. */
  runRows(cycles: number, stimulus: Uint32Array, response?: Uint32Array, stride?: number): this;
  /** Runs until outputs have these values, or the function returns true; at most \`limit\` cycles. */
  runUntil(condition: ${some}<Outputs> | ((model: this) => boolean), limit: number): Reached;
  /** The value of a port, a register, a kept net or a word of a memory. */
  peek<Name extends keyof Ports | keyof Nets>(name: Name): (Ports & Nets)[Name];
  save(): SavedState;
  /** Goes to a saved state, given as an object or as JSON. */
  restore(state: SavedState | string): this;
  /** Back to power-up: cycle 0, all inputs 0. */
  reset(): this;
  /** Calls a listener after each call that changed ports (all outputs unless named). Returns what ends it. */
  subscribe(listener: ChangeListener, names?: readonly (keyof Ports)[]): () => void;
  /** Lets go of everything; later calls throw. */
  dispose(): void;
}

/** How a long call is followed and ended. */
export interface CallOptions {
  readonly onProgress?: (cyclesDone: number) => void;
  /** The promise then rejects with the reason; the model stays where it got to. */
  readonly signal?: AbortSignal;
}

/** The same in a worker: a promise for each answer. */
export interface WorkerModel extends About {
  write(values: ${some}<Inputs>): Promise<void>;
  read(): Promise<Outputs>;
  read<Name extends keyof Ports>(name: Name): Promise<Ports[Name]>;
  step(cycles?: number, options?: CallOptions): Promise<void>;
  run<Name extends keyof Outputs = keyof Outputs>(
    request: RunRequest<Name>,
    options?: CallOptions,
  ): Promise<RunResult<Name>>;
  /** Resolves to the response, in an array of its own. */
  runRows(
    cycles: number,
    stimulus: Uint32Array,
    response?: Uint32Array,
    stride?: number,
  ): Promise<Uint32Array<ArrayBuffer> | undefined>;
  runUntil(values: ${some}<Outputs>, limit: number, options?: CallOptions): Promise<Reached>;
  peek<Name extends keyof Ports | keyof Nets>(name: Name): Promise<(Ports & Nets)[Name]>;
  save(): Promise<SavedState>;
  restore(state: SavedState | string): Promise<void>;
  reset(): Promise<void>;
  subscribe(listener: ChangeListener, names?: readonly (keyof Ports)[]): Promise<() => void>;
  dispose(): void;
}

${loadTypes(kinds)}
/** Loads the model in a worker, so that long runs do not block the page. */
export function loadInWorker(
  source?: ModelSource | Promise<ModelSource>,
  options?: LoadOptions & {
    /** A worker that runs \`worker.mjs\`, where a bundler does not put it beside \`model.mjs\`. */
    readonly worker?: Worker;
  },
): Promise<WorkerModel>;

${lastTypes}`;
};
