import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import type { KeptMemory, KeptNet } from '../../runtime/model/description.js';
import { rangesOf } from './keptMemories.js';
import { declaredName } from './keptNets.js';

/** Kept nets beyond this number are not written out as types. */
const MOST_NETS = 1000;

/** The text of `model.d.ts`: the interface of the package with the netlist's own names. */
export function declarations(
  layout: ModelLayout,
  nets: readonly KeptNet[],
  memories: readonly KeptMemory[],
): string {
  const { name, threeValued, inputs, outputs, clocks } = layout;
  const isOfObjects = [...inputs.ports, ...outputs.ports].some((port) => port.name in {});
  const some = isOfObjects ? SOME : 'Partial';
  return `/**
 * ${comment(name)}, a clocked circuit as a module. Values are numbers up to 32 bits and bigints above${
   threeValued
     ? ';\n * where a bit is x (unknown) they are the text `x` or, for several bits, `0b…`'
     : ''
 }.
 */

${ports('Inputs', 'What goes in. All are 0 at power-up.', inputs.ports, threeValued)}

${ports('Outputs', 'What comes out.', outputs.ports, threeValued)}

/** Every port by name. */
export type Ports = Inputs & Outputs;

${netTypes(nets, memories, threeValued)}

/** Clocks tick by themselves, once in each cycle: ${comment(clocks.join(', ') || 'there is none')}. */
export type Clock = ${clocks.map((clock) => JSON.stringify(clock)).join(' | ') || 'never'};

${some === SOME ? SOME_TYPE : ''}${common(threeValued, some)}`;
}

function ports(
  type: string,
  purpose: string,
  rows: readonly PortLayout[],
  threeValued: boolean,
): string {
  const lines = rows.map(
    ({ name, width, msb, lsb, isVector }) =>
      `  /** ${isVector ? `[${msb}:${lsb}], ${bits(width)}` : '1 bit'} */\n` +
      `  ${JSON.stringify(name)}: ${valueType(width, threeValued)};`,
  );
  return `/** ${purpose} */\nexport interface ${type} {\n${lines.join('\n')}${lines.length ? '\n' : ''}}`;
}

function netTypes(
  nets: readonly KeptNet[],
  memories: readonly KeptMemory[],
  threeValued: boolean,
): string {
  const head =
    '/** State, kept nets and words of memories, by full name, for `peek`. */\n' +
    'export interface Nets {\n';
  if (nets.length > MOST_NETS) {
    return `${head}  [name: string]: ${valueType(1, threeValued)} | ${valueType(33, threeValued)};\n}`;
  }
  const lines = nets.map(
    (net) =>
      `  /** ${comment(declaredName(net))} */\n` +
      `  ${JSON.stringify(net.name)}: ${valueType(net.width, threeValued)};\n`,
  );
  const words = memories.map(
    ({ name, width, indices }) =>
      `  /** ${comment(name)}: ${bits(width)} in a word, ${comment(rangesOf(indices))} */\n` +
      `  [word: ${wordPattern(name, indices.length)}]: ${valueType(width, threeValued)};\n`,
  );
  return `${head}${lines.join('')}${words.join('')}}`;
}

/** The type of the names of a memory's words. */
function wordPattern(name: string, indices: number): string {
  const text = name.replace(/[\\`]|\$(?=\{)/g, '\\$&');
  return `\`${text}${['[$', '{number}]'].join('').repeat(indices)}\``;
}

function valueType(width: number, threeValued: boolean): string {
  const known = width <= 32 ? 'number' : 'bigint';
  if (!threeValued) return known;
  return `${known} | ${width === 1 ? "'x'" : TEXT_TYPE}`;
}

// The type of texts such as 0b10x1.
const TEXT_TYPE = ['`0b', '{string}`'].join('$');

const SOME = 'Some';

// Every object has members of these names, which `Partial` would hold against it.
const SOME_TYPE = `/** Some of the values; a port may be called as a member that all objects have. */
export type Some<Values> = {
  readonly [Name in keyof Values]?:
    | Values[Name]
    | (Name extends keyof Object ? Object[Name] : never);
};

`;

const bits = (width: number): string => (width === 1 ? '1 bit' : `${width} bits`);

// Names may hold anything, in escaped identifiers.
const comment = (text: string): string => text.replaceAll('*/', '* /');

const common = (
  threeValued: boolean,
  some: string,
): string => `/** A port: its bits stand at \`offset\` in a packed row. */
export interface Port<Name extends string = string> {
  readonly name: Name;
  readonly width: number;
  readonly offset: number;
  /** Declared left and right index. */
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
}

/** A net that can be looked at. */
export interface Net {
  readonly name: string;
  readonly width: number;
  readonly msb: number;
  readonly lsb: number;
}

/** An array of words: \`peek\` shows them as \`NAME[INDEX]\`, with as many indices as it has. */
export interface Memory {
  readonly name: string;
  /** Bits in a word. */
  readonly width: number;
  /** Outermost first: indices are low to low + size - 1. */
  readonly indices: readonly { readonly low: number; readonly size: number }[];
}

/**
 * Values of one port over cycles: up to 32 bits one entry a cycle, above that one Uint32 for every
 * 32 bits, the least significant first.
 */
export type Column = Uint8Array | Uint16Array | Uint32Array;

/** A block of cycles. */
export interface RunRequest<Name extends keyof Outputs = keyof Outputs> {
  readonly cycles: number;
  /** Inputs left out hold the values they have. */
  readonly stimulus?: ${some}<Record<keyof Inputs, Column>>;
${
  threeValued
    ? `  /** A 1 for each bit of the stimulus that is x. */
  readonly unknown?: ${some}<Record<keyof Inputs, Column>>;
`
    : ''
}  /** Outputs to record; all unless given. */
  readonly response?: readonly Name[];
}

/** Entry k of a column is what the output was in cycle k, just before the clock ticked. */
export interface RunResult<Name extends keyof Outputs = keyof Outputs> {
  readonly cycles: number;
  readonly response: { readonly [Output in Name]: Uint32Array<ArrayBuffer> };
${
  threeValued
    ? `  /** A 1 for each bit of the response that is x; such bits are 0 in \`response\`. */
  readonly unknown: { readonly [Output in Name]: Uint32Array<ArrayBuffer> };
`
    : ''
}}

/** How a run to a condition ended: whether it holds, and how many cycles passed. */
export interface Reached {
  readonly met: boolean;
  readonly cycles: number;
}

/** Where a model stands, as plain data for JSON. Fits every package of the same netlist. */
export interface SavedState {
  readonly format: string;
  readonly model: string;
  readonly netlist: string;
  readonly elements: string;
  readonly cycle: number;
  readonly state: string;
  readonly unknown?: string;
  readonly inputs: string;
  readonly unknownInputs?: string;
  readonly before?: string;
  readonly unknownBefore?: string;
  readonly memories?: string;
}

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

/** Where the module comes from; beside \`model.mjs\` unless given. */
export type ModelSource = string | URL | BufferSource | Response | WebAssembly.Module;

export interface LoadOptions {
  /** How registers start to which the netlist gives no value; \`${threeValued ? 'unknown' : 'zero'}\` unless given. */
  readonly powerUp?: 'zero' | 'one' | 'random'${threeValued ? " | 'unknown'" : ''};
  /** Of random power-up. */
  readonly seed?: number | bigint;
  /** Whether the module must have the SHA-256 that this package was written with. */
  readonly verify?: boolean;
}

/** Loads the model, powered up. Each call makes an instance of its own. */
export function load(source?: ModelSource | Promise<ModelSource>, options?: LoadOptions): Promise<Model>;

/** Compiles the module once, for several instances: \`load(await compile())\`. */
export function compile(
  source?: ModelSource | Promise<ModelSource>,
  options?: Pick<LoadOptions, 'verify'>,
): Promise<WebAssembly.Module>;

/** Loads the model in a worker, so that long runs do not block the page. */
export function loadInWorker(
  source?: ModelSource | Promise<ModelSource>,
  options?: LoadOptions & {
    /** A worker that runs \`worker.mjs\`, where a bundler does not put it beside \`model.mjs\`. */
    readonly worker?: Worker;
  },
): Promise<WorkerModel>;

/** A value in hexadecimal, or in binary where a bit is x. */
export function valueText(value: number | bigint | string, width: number): string;

/** Thrown when a cycle has no result, such as a loop that never settles. */
export class RunFault extends Error {
  /** Cycles that passed in the call before the one that failed. */
  readonly completed: number;
  /** FILE:LINE:COL in the netlist, where known. */
  readonly place: string;
}

/** What this package is. */
export const identity: {
  readonly name: string;
  /** SHA-256 of \`model.wasm\`. */
  readonly sha256: string;
  readonly netlist: string;
  readonly threeValued: boolean;
};
`;
