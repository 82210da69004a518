import type { LaneCount } from '../laneLayout.js';
import type { BareLaneModel } from '../laneModel.js';
import type { ModelLayout } from '../layout.js';
import type { WasmModel } from '../wasmModel.js';

/** Custom section of `model.wasm` that holds the description, as JSON. */
export const DESCRIPTION_SECTION = 'clockstride';

/** Custom section that holds a second module: it computes kept nets, and is run for that alone. */
export const PROBES_SECTION = 'clockstride.probes';

/** The form of the description; a runtime reads no other. */
export const DESCRIPTION_FORMAT = 1;

/** A net, or a vector of nets, that can be looked at by its hierarchical name. */
export interface KeptNet {
  readonly name: string;
  readonly width: number;
  /** Declared left and right index; both 0 for a scalar. */
  readonly msb: number;
  readonly lsb: number;
  /**
   * Where its bits are, least significant first: a number is the place of the first bit in the row
   * of the probes, a list names a state element for each bit.
   */
  readonly from: number | readonly number[];
}

/** A memory whose words can be looked at as `name[index]`, with as many indices as it has. */
export interface KeptMemory {
  readonly name: string;
  readonly width: number;
  /** The lowest index and the number of indices, outermost first; the last counts fastest. */
  readonly indices: readonly { readonly low: number; readonly size: number }[];
  /** Its first byte in `Engine.memoryState`. */
  readonly from: number;
}

/** What travels inside `model.wasm` beside its code, whatever it is compiled for. */
export interface Description {
  readonly format: typeof DESCRIPTION_FORMAT;
  /** Fingerprint of what was compiled: sources, top module and clocks. */
  readonly netlist: string;
  /** Independent sequences that run side by side. */
  readonly lanes: 1 | LaneCount;
  readonly model: { readonly layout: ModelLayout };
  /** For each state element the value that the netlist gives at power-up: `0`, `1` or `x` for none. */
  readonly initial: string;
  /** Cycles after which the clocks' pattern repeats. */
  readonly patternLength: number;
  readonly nets: readonly KeptNet[];
  readonly memories: readonly KeptMemory[];
  /** Of the module that computes kept nets; absent where all of them are state. */
  readonly probes?: Omit<WasmModel, 'bytes'>;
}

/** Of a package that runs one sequence. */
export interface ModelDescription extends Description {
  readonly lanes: 1;
  readonly model: Omit<WasmModel, 'bytes'>;
}

/** Of a package that runs many side by side. */
export interface LaneDescription extends Description {
  readonly lanes: LaneCount;
  readonly model: BareLaneModel;
}
