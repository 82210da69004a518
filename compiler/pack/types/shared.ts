/** What the declarations of all packages have, of one sequence or of many. */

export const placeTypes = `/** A port: its bits stand at \`offset\` in a packed row. */
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
`;

/** What differs between packages. */
export interface Kinds {
  readonly threeValued: boolean;
  /** The type of some of the ports: `Partial`, or one of our own. */
  readonly some: string;
}

/** A block and what it gives: what is given and what is recorded for one port. */
export const blockTypes = (
  { threeValued, some }: Kinds,
  column: string,
  response: string,
): string => `/** A block of cycles. */
export interface RunRequest<Name extends keyof Outputs = keyof Outputs> {
  readonly cycles: number;
  /** Inputs left out hold the values they have. */
  readonly stimulus?: ${some}<Record<keyof Inputs, ${column}>>;
${
  threeValued
    ? `  /** A 1 for each bit of the stimulus that is x. */
  readonly unknown?: ${some}<Record<keyof Inputs, ${column}>>;
`
    : ''
}  /** Outputs to record; all unless given. */
  readonly response?: readonly Name[];
}

/** Entry k of a column is what the output was in cycle k, just before the clock ticked. */
export interface RunResult<Name extends keyof Outputs = keyof Outputs> {
  readonly cycles: number;
  readonly response: { readonly [Output in Name]: ${response} };
${
  threeValued
    ? `  /** A 1 for each bit of the response that is x; such bits are 0 in \`response\`. */
  readonly unknown: { readonly [Output in Name]: ${response} };
`
    : ''
}}
`;

export const savedStateType = `/** Where a model stands, as plain data for JSON. Fits every package of the same netlist. */
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
`;

export const loadTypes = ({
  threeValued,
}: Kinds): string => `/** Where the module comes from; beside \`model.mjs\` unless given. */
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
`;

export const lastTypes = `/** A value in hexadecimal, or in binary where a bit is x. */
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
  /** Independent sequences that run side by side. */
  readonly lanes: number;
};
`;
