import { type Engine, RunFault } from './engine.js';
import { checkRun } from './engineArguments.js';
import { type ModelLayout, rowStride } from './layout.js';
import { loadStates, showStates } from './stateBits.js';
import type { WasmModel } from './wasmModel.js';

/** Bytes that stimulus and response of one call of the module may take, so that both stay cached. */
const BUFFER_BYTES = 1 << 16;

/**
 * Cycles in one call of the module. A loop that runs is not replaced by better code, so calls are
 * kept short enough for the optimizing tier to take over soon.
 */
const CALL_CYCLES = 1024;

interface ModelExports {
  readonly memory: WebAssembly.Memory;
  readonly current: WebAssembly.Global<'i32'>;
  readonly position: WebAssembly.Global<'i32'>;
  readonly fault: WebAssembly.Global<'i32'>;
  run(cycles: number, stimulus: number, step: number, response: number, stride: number): number;
}

/** Runs a compiled model. Works in browsers, workers and Node alike. */
export class WasmEngine implements Engine {
  readonly layout: ModelLayout;
  readonly #model: WasmModel;
  readonly #exports: ModelExports;
  readonly #stimulusWords: number;
  readonly #responseWords: number;
  readonly #stimulus: number;
  readonly #response: number;
  readonly #callCycles: number;

  private constructor(model: WasmModel, instance: WebAssembly.Instance) {
    this.layout = model.layout;
    this.#model = model;
    this.#exports = instance.exports as unknown as ModelExports;
    const { inputs, outputs, threeValued } = model.layout;
    this.#stimulusWords = rowStride(inputs, threeValued);
    this.#responseWords = rowStride(outputs, threeValued);
    const rowBytes = 4 * Math.max(this.#stimulusWords, this.#responseWords, 1);
    this.#callCycles = Math.max(1, Math.min(CALL_CYCLES, Math.floor(BUFFER_BYTES / rowBytes)));
    this.#stimulus = model.memory.buffers;
    this.#response = this.#stimulus + 4 * this.#stimulusWords * this.#callCycles;
    this.#growTo(this.#response + 4 * this.#responseWords * this.#callCycles);
  }

  /** Makes an engine of a model, in power-up state 0. Compiles its module if none is given. */
  static async create(model: WasmModel, module?: WebAssembly.Module): Promise<WasmEngine> {
    const compiled = module ?? (await WebAssembly.compile(model.bytes));
    const engine = new WasmEngine(model, await WebAssembly.instantiate(compiled));
    engine.reset(new Uint8Array(model.layout.stateNames.length));
    return engine;
  }

  reset(state: Uint8Array): void {
    const bits = loadStates(this.layout, this.#model, state);
    const [first] = this.#model.memory.areas;
    this.#bytes(first, bits.length).set(bits);
    this.#exports.current.value = first;
    this.#exports.position.value = 0;
  }

  state(): Uint8Array {
    const count = this.#model.states.length;
    const bits = this.#bytes(this.#exports.current.value, count);
    return showStates(this.layout, this.#model, bits);
  }

  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void {
    checkRun(this.layout, cycles, stimulus, stimulusStride, response);
    const memory = new Uint32Array(this.#exports.memory.buffer);
    for (let done = 0; done < cycles; ) {
      const count = Math.min(this.#callCycles, cycles - done);
      this.#loadRows(memory, stimulus, done * stimulusStride, stimulusStride, count);
      const ran = this.#call(count, stimulusStride === 0, response === undefined);
      if (response !== undefined) {
        const from = this.#response >>> 2;
        response.set(
          memory.subarray(from, from + ran * this.#responseWords),
          done * this.#responseWords,
        );
      }
      done += ran;
      if (ran < count) throw new RunFault(done, this.#model.faults[this.#exports.fault.value]!);
    }
  }

  #call(cycles: number, held: boolean, unobserved: boolean): number {
    const step = held ? 0 : this.#stimulusWords * 4;
    const stride = unobserved ? 0 : this.#responseWords * 4;
    return this.#exports.run(cycles, this.#stimulus, step, this.#response, stride);
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

  #growTo(bytes: number): void {
    const { memory } = this.#exports;
    const missing = bytes - memory.buffer.byteLength;
    if (missing > 0) memory.grow(Math.ceil(missing / 65536));
  }
}
