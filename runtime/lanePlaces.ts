import { laneStrides } from './laneLayout.js';
import type { BareLaneModel } from './laneModel.js';
import { rowStride } from './layout.js';

/** Bytes that rows of one call of the module may take, so that they stay cached. */
const BUFFER_BYTES = 1 << 17;

/** Cycles in one call of the module, see `WasmEngine`. */
const CALL_CYCLES = 1024;

/** What the module of a `LaneModel` exports. */
export interface LaneExports {
  readonly memory: WebAssembly.Memory;
  run(
    cycles: number,
    stimulus: number,
    stimulusStride: number,
    response: number,
    responseStride: number,
    current: number,
    next: number,
    position: number,
  ): number;
  spread(from: number, to: number, rows: number): void;
}

/** Where one engine's states stand, and what it shares with others. */
export interface LanePlace {
  readonly exports: LaneExports;
  readonly areas: readonly [number, number];
  readonly buffers: LaneBuffers;
}

/** Addresses of the rows of one call. */
export interface LaneBuffers {
  readonly stimulus: number;
  readonly response: number;
  /** Packed stimulus rows. */
  readonly packed: number;
  /** Rows that there is room for. */
  readonly rows: number;
}

const roundUp = (value: number): number => Math.ceil(value / 64) * 64;

/** Lays out the rows and the states of so many engines in the memory of one instance, which grows. */
export function placesOf(model: BareLaneModel, exports: LaneExports, count: number): LanePlace[] {
  const { layout, lanes, memory, states } = model;
  const strides = laneStrides(layout, lanes);
  const [input, output] = [strides.input * 4, strides.output * 4];
  const packedRow = rowStride(layout.inputs, layout.threeValued) * 4;
  const fitting = Math.floor(BUFFER_BYTES / Math.max(1, input + output));
  const rows = Math.max(1, Math.min(CALL_CYCLES, fitting));
  const stimulus = memory.free;
  const response = stimulus + roundUp(rows * input);
  const packed = response + roundUp(rows * output);
  const buffers = { stimulus, response, packed, rows };
  const area = roundUp(states.length * (lanes >>> 3));
  const first = packed + roundUp(rows * packedRow);
  const missing = first + 2 * count * area - exports.memory.buffer.byteLength;
  if (missing > 0) exports.memory.grow(Math.ceil(missing / 65536));
  return Array.from({ length: count }, (_, i): LanePlace => {
    const at = first + 2 * i * area;
    return { exports, areas: [at, at + area], buffers };
  });
}
