import { type MarkingEngine, RunFault, type RunPoint } from './engine.js';
import { checkBefore, checkRun, lastRow } from './engineArguments.js';
import { type ModelLayout, rowStride } from './layout.js';
import { checkMemoryState, memoryStateBytes } from './memoryState.js';
import { loadStates, showStates } from './stateBits.js';
import { type MarkExports, markBytes, StateMark } from './stateMark.js';
import { type TableExports, TableRunner, tableBytes } from './table/tableRunner.js';
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
  /** Of a module that passes over cycles in which nothing changes, how many it has passed over. */
  readonly quiet?: WebAssembly.Global<'i32'>;
  run(cycles: number, stimulus: number, step: number, response: number, stride: number): number;
}

/** How an engine uses its module. */
export interface WasmEngineOptions {
  /**
   * Whether a model with few states and inputs runs by a table that it fills as it goes, which gives
   * the same results sooner; default true.
   */
  readonly usesTable?: boolean;
}

/** Runs a compiled model. Works in browsers, workers and Node alike. */
export class WasmEngine implements MarkingEngine {
  readonly layout: ModelLayout;
  readonly #model: WasmModel;
  readonly #exports: ModelExports;
  readonly #initialMemory: Uint8Array;
  readonly #stimulusWords: number;
  readonly #responseWords: number;
  readonly #stimulus: number;
  readonly #response: number;
  readonly #callCycles: number;
  readonly #end: number;
  readonly #table: TableRunner | undefined;
  #before: Uint32Array | undefined;
  #mark: { readonly state: StateMark; readonly memory: Uint8Array } | undefined;
  #sinceMark = 0;
  #repeatedAfter: number | undefined;

  private constructor(
    model: WasmModel,
    instance: WebAssembly.Instance,
    { usesTable = true }: WasmEngineOptions,
  ) {
    this.layout = model.layout;
    this.#model = model;
    this.#exports = instance.exports as unknown as ModelExports;
    this.#initialMemory = this.memoryState();
    const { inputs, outputs, threeValued } = model.layout;
    this.#stimulusWords = rowStride(inputs, threeValued);
    this.#responseWords = rowStride(outputs, threeValued);
    const rowBytes = 4 * Math.max(this.#stimulusWords, this.#responseWords, 1);
    this.#callCycles = Math.max(1, Math.min(CALL_CYCLES, Math.floor(BUFFER_BYTES / rowBytes)));
    this.#stimulus = model.memory.buffers;
    this.#response = this.#stimulus + 4 * this.#stimulusWords * this.#callCycles;
    const end = this.#response + 4 * this.#responseWords * this.#callCycles;
    const hasTable = usesTable && 'runTable' in this.#exports;
    const table = Math.ceil(end / 64) * 64;
    this.#end = hasTable ? table + tableBytes(model) : end;
    this.#growTo(this.#end);
    if (!hasTable) return;
    this.#table = new TableRunner(model, instance.exports as unknown as TableExports, table);
  }

  /**
   * Makes an engine of a model, in the state that the model was made for, or else with all bits 0.
   * Compiles its module if none is given.
   */
  static async create(
    model: WasmModel,
    module?: WebAssembly.Module,
    options: WasmEngineOptions = {},
  ): Promise<WasmEngine> {
    const compiled = module ?? (await WebAssembly.compile(model.bytes));
    const engine = new WasmEngine(model, await WebAssembly.instantiate(compiled), options);
    engine.reset(model.start ?? new Uint8Array(model.layout.stateNames.length));
    return engine;
  }

  reset(state: Uint8Array): void {
    this.#load(loadStates(this.layout, this.#model, state), 0);
    this.#contents.set(this.#initialMemory);
    this.#before = undefined;
  }

  save(): RunPoint {
    const [state, memory] = [this.state(), this.memoryState()];
    return { state, memory, before: this.#before, position: this.#exports.position.value };
  }

  restore({ state, memory, before, position }: RunPoint): void {
    checkBefore(this.layout, before);
    this.#load(loadStates(this.layout, this.#model, state, before), position);
    this.#before = before;
    this.loadMemory(memory);
  }

  /** What the next cycle would sample with a row of inputs. Nothing changes. Throws `RunFault`. */
  preview(stimulus: Uint32Array, response: Uint32Array): void {
    this.#table?.leave();
    const { current, position } = this.#exports;
    const [area, place, before] = [current.value, position.value, this.#before];
    const contents = this.layout.memories.length > 0 ? this.memoryState() : undefined;
    try {
      this.run(1, stimulus, 0, response);
    } finally {
      // A cycle writes to the other area only, so the one that it read is as it was.
      current.value = area;
      position.value = place;
      this.#before = before;
      this.#table?.forget();
      if (contents !== undefined) this.loadMemory(contents);
    }
  }

  state(): Uint8Array {
    this.#table?.leave();
    const count = this.#model.states.length;
    const bits = this.#bytes(this.#exports.current.value, count);
    return showStates(this.layout, this.#model, bits);
  }

  /**
   * Whether the next cycle is run by table: the model can have one, and neither the number of its
   * states nor their novelty has made straight-line code better.
   */
  get runsByTable(): boolean {
    return this.#table?.isInUse ?? false;
  }

  /** How many cycles were passed over, since nothing changed in them, of the last 2^32. */
  get quietCycles(): number {
    return (this.#exports.quiet?.value ?? 0) >>> 0;
  }

  get canMark(): boolean {
    return 'marked' in this.#exports;
  }

  get repeatedAfter(): number | undefined {
    return this.#repeatedAfter;
  }

  mark(pace: number): void {
    if (!this.canMark) throw new RangeError('the model was made without comparing its state');
    this.#table?.leave();
    this.#table?.forget();
    const at = Math.ceil(this.#end / 16) * 16;
    this.#growTo(at + markBytes(this.#model));
    const exports = this.#exports as unknown as MarkExports;
    const state = this.#mark?.state ?? new StateMark(this.#model, exports, at);
    state.set(pace);
    this.#mark = { state, memory: this.memoryState() };
    this.#sinceMark = 0;
    this.#repeatedAfter = undefined;
  }

  memoryState(): Uint8Array {
    return this.#contents.slice();
  }

  loadMemory(bytes: Uint8Array): void {
    checkMemoryState(this.layout, bytes);
    this.#contents.set(bytes);
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
      if (this.#isAtMark(ran)) continue;
      if (ran < count) throw new RunFault(done, this.#model.faults[this.#exports.fault.value]!);
    }
    if (cycles > 0) this.#before = lastRow(this.layout, cycles, stimulus, stimulusStride);
  }

  /** Whether the cycles done last ended in the marked state, as far as the module compares. */
  #isAtMark(cycles: number): boolean {
    this.#sinceMark += cycles;
    if (this.#mark === undefined || !this.#mark.state.takeMatch()) return false;
    const { memory } = this.#mark;
    const isSame = memory.length === 0 || this.memoryState().every((byte, i) => byte === memory[i]);
    if (!isSame) return true;
    this.#repeatedAfter = this.#sinceMark;
    this.#mark.state.clear();
    return true;
  }

  #call(cycles: number, held: boolean, unobserved: boolean): number {
    const step = held ? 0 : this.#stimulusWords * 4;
    const stride = unobserved ? 0 : this.#responseWords * 4;
    // A table knows the state by a number and has no bits to compare.
    const isLooking = this.#mark !== undefined && this.#repeatedAfter === undefined;
    const runner = isLooking ? this.#exports : (this.#table ?? this.#exports);
    return runner.run(cycles, this.#stimulus, step, this.#response, stride);
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

  #load(bits: Uint8Array, position: number): void {
    const [first] = this.#model.memory.areas;
    this.#bytes(first, bits.length).set(bits);
    this.#exports.current.value = first;
    this.#exports.position.value = position;
    this.#table?.forget();
  }

  get #contents(): Uint8Array {
    return this.#bytes(this.#model.memory.contents, memoryStateBytes(this.layout));
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
