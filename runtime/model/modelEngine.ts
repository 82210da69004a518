import { RunFault, type RunPoint } from '../engine.js';
import { checkRun } from '../engineArguments.js';
import { type ModelLayout, rowStride } from '../layout.js';
import { checkMemoryState, memoryStateBytes } from '../memoryState.js';
import { loadStates, showStates } from '../stateBits.js';
import type { WasmModel } from '../wasmModel.js';

/** As of `WasmEngine`: what is passed in one call stays cached, and calls stay short. */
const BUFFER_BYTES = 1 << 16;
const CALL_CYCLES = 1024;

interface ModelExports {
  readonly memory: WebAssembly.Memory;
  readonly current: WebAssembly.Global<'i32'>;
  readonly position: WebAssembly.Global<'i32'>;
  readonly fault: WebAssembly.Global<'i32'>;
  run(cycles: number, stimulus: number, step: number, response: number, stride: number): number;
}

/** A compiled model without its bytes, which have become a module. */
export type BareModel = Omit<WasmModel, 'bytes'>;

/**
 * Runs the module of a package: the small part of `WasmEngine` that a package needs. It can tell
 * what a cycle would sample without running it.
 */
export class ModelEngine {
  readonly layout: ModelLayout;
  readonly #model: BareModel;
  readonly #exports: ModelExports;
  readonly #initialMemory: Uint8Array;
  /** The contents of memories while a preview may change them. */
  readonly #kept: Uint8Array;
  readonly #stimulusWords: number;
  readonly #responseWords: number;
  readonly #stimulus: number;
  readonly #response: number;
  readonly #callCycles: number;

  private constructor(model: BareModel, instance: WebAssembly.Instance) {
    this.layout = model.layout;
    this.#model = model;
    this.#exports = instance.exports as unknown as ModelExports;
    this.#initialMemory = this.memoryState();
    this.#kept = new Uint8Array(this.#initialMemory.length);
    const { inputs, outputs, threeValued } = model.layout;
    this.#stimulusWords = rowStride(inputs, threeValued);
    this.#responseWords = rowStride(outputs, threeValued);
    const rowBytes = 4 * Math.max(this.#stimulusWords, this.#responseWords, 1);
    this.#callCycles = Math.max(1, Math.min(CALL_CYCLES, Math.floor(BUFFER_BYTES / rowBytes)));
    this.#stimulus = model.memory.buffers;
    this.#response = this.#stimulus + 4 * this.#stimulusWords * this.#callCycles;
    const { memory } = this.#exports;
    const end = this.#response + 4 * this.#responseWords * this.#callCycles;
    const missing = end - memory.buffer.byteLength;
    if (missing > 0) memory.grow(Math.ceil(missing / 65536));
  }

  /** Makes an instance; call `reset` or `restore` before anything else. */
  static async create(model: BareModel, module: WebAssembly.Module): Promise<ModelEngine> {
    return new ModelEngine(model, await WebAssembly.instantiate(module));
  }

  /** As `Engine.reset`. */
  reset(state: Uint8Array): void {
    this.restore({ state, memory: this.#initialMemory, before: undefined, position: 0 });
  }

  /** As `Engine.restore`. */
  restore({ state, memory, before, position }: RunPoint): void {
    const bits = loadStates(this.layout, this.#model, state, before);
    checkMemoryState(this.layout, memory);
    const [first] = this.#model.memory.areas;
    this.#bytes(first, bits.length).set(bits);
    this.contents.set(memory);
    this.#exports.current.value = first;
    this.#exports.position.value = position;
  }

  /** As `Engine.state`. */
  state(): Uint8Array {
    const bits = this.#bytes(this.#exports.current.value, this.#model.states.length);
    return showStates(this.layout, this.#model, bits);
  }

  /** As `Engine.memoryState`. */
  memoryState(): Uint8Array {
    return this.contents.slice();
  }

  /** What `memoryState` copies, as it stands: a view that any call may change or move. */
  get contents(): Uint8Array {
    return this.#bytes(this.#model.memory.contents, memoryStateBytes(this.layout));
  }

  /** What the next cycle would sample with a row of inputs. Nothing changes. Throws `RunFault`. */
  preview(stimulus: Uint32Array, response: Uint32Array): void {
    const { current, position } = this.#exports;
    const [area, place] = [current.value, position.value];
    this.#kept.set(this.contents);
    try {
      this.run(1, stimulus, 0, response);
    } finally {
      // A cycle writes to the other area only, so the one that it read is as it was.
      current.value = area;
      position.value = place;
      this.contents.set(this.#kept);
    }
  }

  /** As `Engine.run`. */
  run(
    cycles: number,
    stimulus: Uint32Array,
    stride: number,
    response: Uint32Array | undefined,
  ): void {
    checkRun(this.layout, cycles, stimulus, stride, response);
    const memory = new Uint32Array(this.#exports.memory.buffer);
    const step = stride === 0 ? 0 : 4 * this.#stimulusWords;
    const words = this.#responseWords;
    for (let done = 0; done < cycles; ) {
      const count = Math.min(this.#callCycles, cycles - done);
      this.#loadRows(memory, stimulus, done * stride, stride, count);
      const [from, to] = [this.#stimulus, this.#response];
      const ran = this.#exports.run(count, from, step, to, response ? 4 * words : 0);
      response?.set(memory.subarray(to >>> 2, (to >>> 2) + ran * words), done * words);
      done += ran;
      if (ran < count) throw new RunFault(done, this.#model.faults[this.#exports.fault.value]!);
    }
  }

  #loadRows(
    memory: Uint32Array,
    stimulus: Uint32Array,
    from: number,
    stride: number,
    count: number,
  ): void {
    const words = this.#stimulusWords;
    const at = this.#stimulus >>> 2;
    if (stride === words || stride === 0) {
      const rows = stride === 0 ? 1 : count;
      memory.set(stimulus.subarray(from, from + rows * words), at);
      return;
    }
    for (let row = 0; row < count; row++) {
      const start = from + row * stride;
      memory.set(stimulus.subarray(start, start + words), at + row * words);
    }
  }

  #bytes(address: number, length: number): Uint8Array {
    return new Uint8Array(this.#exports.memory.buffer, address, length);
  }
}
