import type { Fault } from './engine.js';
import type { ModelLayout } from './layout.js';
import type { StateMap } from './stateBits.js';

/** Where things stand in the memory of a compiled model; addresses and sizes in bytes. */
export interface MemoryMap {
  /**
   * Two areas of equal layout; a cycle reads the state from one and writes the next state to the
   * other. Each starts with one byte per state bit, of which bit 0 counts.
   */
  readonly areas: readonly [number, number];
  /** The contents of the memories, as `Engine.memoryState` gives them. */
  readonly contents: number;
  /** First byte free for stimulus and response rows. */
  readonly buffers: number;
}

/** A compiled model: the bytes of a WebAssembly module and what is needed to run it. */
export interface WasmModel extends StateMap {
  /**
   * Exports `memory`, the mutable globals `current` (address of the area that holds the state) and
   * `position` (place of the next cycle in the pattern of the clocks), and `run(cycles, stimulus, stimulusStride, response, responseStride)`, which returns the
   * number of cycles done: fewer than asked for if one has no result, whose fault number is then
   * in the global `fault`. A module that passes over cycles in which nothing changes counts them in
   * the global `quiet`.
   */
  readonly bytes: Uint8Array<ArrayBuffer>;
  readonly layout: ModelLayout;
  readonly memory: MemoryMap;
  /** The state elements that it starts with, where it was made for one start. */
  readonly start?: Uint8Array;
  /** The faults by number. */
  readonly faults: readonly Fault[];
}
