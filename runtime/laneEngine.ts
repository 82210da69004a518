import type { Fault } from './engine.js';
import { laneStrides } from './laneLayout.js';
import type { BareLaneModel, LaneModel } from './laneModel.js';
import { type LaneExports, type LanePlace, placesOf } from './lanePlaces.js';
import { type ModelLayout, rowStride } from './layout.js';
import { loadStates, showStates } from './stateBits.js';

/** A lane that ended because a cycle has no result, as `RunFault` ends the run of an engine. */
export interface LaneFault extends Fault {
  readonly lane: number;
  /** The cycle without result, from 0 at the reset. */
  readonly cycle: number;
}

/**
 * Runs a compiled lane model: as many independent sequences of one circuit as a word has bits, each
 * from a state and with a stimulus of its own. Works in browsers, workers and Node alike.
 *
 * Lane l does exactly what a `WasmEngine` of the circuit does with its state and stimulus. A lane
 * in which a cycle has no result is listed in `faults` and means nothing from then on; the others
 * go on.
 */
export class LaneEngine {
  readonly layout: ModelLayout;
  readonly lanes: number;
  /** Lanes that have ended, in the order in which they did. */
  readonly faults: readonly LaneFault[];
  readonly #faults: LaneFault[] = [];
  readonly #model: BareLaneModel;
  readonly #place: LanePlace;
  #cycles = 0;
  /** Whether the state is in the second area. */
  #isSwapped = false;
  /** Per 32 lanes, a 1 for each that goes on. */
  readonly #running: Uint32Array;

  private constructor(model: BareLaneModel, place: LanePlace) {
    this.layout = model.layout;
    this.lanes = model.lanes;
    this.faults = this.#faults;
    this.#model = model;
    this.#place = place;
    this.#running = new Uint32Array(model.lanes >>> 5);
    this.reset(new Uint8Array(model.layout.stateNames.length));
  }

  /** Makes an engine of a model, in power-up state 0. Compiles its module if none is given. */
  static async create(model: LaneModel): Promise<LaneEngine>;
  static async create(model: BareLaneModel, module: WebAssembly.Module): Promise<LaneEngine>;
  static async create(model: LaneModel, module?: WebAssembly.Module): Promise<LaneEngine> {
    const [engine] = await LaneEngine.createMany(model, 1, module);
    return engine!;
  }

  /**
   * Makes several independent engines of a model, which share code and memory. Throws RangeError
   * unless `count` is a count from 1 on.
   */
  static async createMany(
    model: LaneModel,
    count: number,
    module?: WebAssembly.Module,
  ): Promise<LaneEngine[]> {
    if (!Number.isSafeInteger(count) || count < 1) {
      throw new RangeError(`engines are a count from 1 on, got ${count}`);
    }
    const compiled = module ?? (await WebAssembly.compile(model.bytes));
    const instance = await WebAssembly.instantiate(compiled);
    const places = placesOf(model, instance.exports as unknown as LaneExports, count);
    return places.map((place) => new LaneEngine(model, place));
  }

  /** Cycles run since the reset; set to a number, they count on from there. */
  get cycles(): number {
    return this.#cycles;
  }

  set cycles(cycles: number) {
    this.#cycles = cycles;
  }

  /**
   * Sets every lane to a state, as `Engine.reset` takes it: the same one, or one for each lane.
   * Lanes that have ended go on again. Throws RangeError for a wrong number of states, and what
   * `Engine.reset` throws.
   */
  reset(states: Uint8Array | readonly Uint8Array[]): void {
    const { layout } = this;
    const each = states instanceof Uint8Array ? [states] : states;
    if (!(states instanceof Uint8Array) && states.length !== this.lanes) {
      throw new RangeError(`expected ${this.lanes} states, got ${states.length}`);
    }
    const loaded = each.map((state) => loadStates(layout, this.#model, state));
    this.#isSwapped = false;
    this.#cycles = 0;
    this.#faults.length = 0;
    this.#running.fill(0xffffffff);
    const words = this.stateWords();
    const parts = this.#running.length;
    words.fill(0);
    if (loaded.length === 1) {
      loaded[0]!.forEach((value, bit) => {
        words.fill(-value, bit * parts, (bit + 1) * parts);
      });
      return;
    }
    loaded.forEach((bits, lane) => {
      const part = lane >>> 5;
      for (let bit = 0; bit < bits.length; bit++) {
        words[bit * parts + part]! |= bits[bit]! << (lane & 31);
      }
    });
  }

  /**
   * Runs `cycles` cycles of all lanes.
   *
   * `stimulus` holds lane rows (see `laneRowWords`), `stimulusStride` numbers apart; with stride 0
   * the one row is held. `response` takes one lane row for each cycle, or is undefined if nobody
   * looks. Throws RangeError where an array is too short.
   */
  run(cycles: number, stimulus: Uint32Array, stimulusStride: number, response?: Uint32Array): void {
    const { input } = laneStrides(this.layout, this.#model.lanes);
    this.#check(cycles, stimulus, stimulusStride, input, response);
    const { stimulus: at } = this.#place.buffers;
    this.#inCalls(cycles, stimulusStride === 0, response, (done, count) => {
      const rows = stimulusStride === 0 ? 1 : count;
      this.#copyRows(stimulus, done * stimulusStride, stimulusStride, input, rows, at);
    });
  }

  /**
   * Runs `cycles` cycles with the same inputs in all lanes: `stimulus` holds packed rows as
   * `Engine.run` takes them. For the rest see `run`.
   */
  runAlike(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response?: Uint32Array,
  ): void {
    const words = rowStride(this.layout.inputs, this.layout.threeValued);
    this.#check(cycles, stimulus, stimulusStride, words, response);
    const { stimulus: to, packed } = this.#place.buffers;
    this.#inCalls(cycles, stimulusStride === 0, response, (done, count) => {
      const rows = stimulusStride === 0 ? 1 : count;
      this.#copyRows(stimulus, done * stimulusStride, stimulusStride, words, rows, packed);
      this.#place.exports.spread(packed, to, rows);
    });
  }

  /** Lane rows that `stimulusRows` and `responseRows` have room for. */
  get rows(): number {
    return this.#place.buffers.rows;
  }

  /**
   * Where `runInPlace` reads lane rows, one behind another: a view of the module's memory, which
   * other calls of this engine, and of those made together with it, write to.
   */
  get stimulusRows(): Uint32Array {
    const { input } = laneStrides(this.layout, this.#model.lanes);
    return this.#numbers(this.#place.buffers.stimulus, this.rows * input);
  }

  /** Where `runInPlace` writes lane rows; see `stimulusRows`. */
  get responseRows(): Uint32Array {
    const { output } = laneStrides(this.layout, this.#model.lanes);
    return this.#numbers(this.#place.buffers.response, this.rows * output);
  }

  /**
   * Runs `cycles` cycles on the rows in `stimulusRows` and leaves the response in `responseRows`:
   * as `run`, without copying either. Throws RangeError for more cycles than `rows`.
   */
  runInPlace(cycles: number): void {
    if (!Number.isSafeInteger(cycles) || cycles < 0 || cycles > this.rows) {
      throw new RangeError(`cycles are 0 to ${this.rows}, got ${cycles}`);
    }
    for (let done = 0; done < cycles; ) done += this.#call(done, cycles - done, false, false);
  }

  /**
   * What the next cycle would give with a lane row of inputs, and the lanes in which it has no
   * result. Nothing changes.
   */
  preview(stimulus: Uint32Array, response: Uint32Array): LaneFault[] {
    const [cycles, isSwapped, ended] = [this.#cycles, this.#isSwapped, this.#faults.length];
    const running = this.#running.slice();
    this.run(1, stimulus, 0, response);
    // A cycle writes to the other area only, so the one that it read is as it was.
    this.#cycles = cycles;
    this.#isSwapped = isSwapped;
    this.#running.set(running);
    return this.#faults.splice(ended);
  }

  /**
   * Sets one lane to a state and leaves the others as they are; one that has ended goes on again.
   * `before` is the packed row of its inputs in the cycle before, if there was one. Throws
   * RangeError for no lane, and what `Engine.reset` throws.
   */
  restore(lane: number, state: Uint8Array, before?: Uint32Array): void {
    this.#checkLane(lane);
    const bits = loadStates(this.layout, this.#model, state, before);
    const words = this.stateWords();
    const parts = this.#running.length;
    const part = lane >>> 5;
    const one = 1 << (lane & 31);
    for (let bit = 0, at = part; bit < bits.length; bit++, at += parts) {
      words[at] = bits[bit] === 1 ? words[at]! | one : words[at]! & ~one;
    }
    this.#running[part]! |= one;
    const fault = this.#faults.findIndex((found) => found.lane === lane);
    if (fault >= 0) this.#faults.splice(fault, 1);
  }

  /** The state elements of a lane, as `Engine.state` gives them. Throws RangeError for no lane. */
  state(lane: number): Uint8Array {
    this.#checkLane(lane);
    const words = this.stateWords();
    const parts = this.#running.length;
    const part = lane >>> 5;
    const bits = this.#model.states.map(
      (_, bit) => (words[bit * parts + part]! >>> (lane & 31)) & 1,
    );
    return showStates(this.layout, this.#model, bits);
  }

  /**
   * The words of all state bits as they stand, in the order of `LaneModel.states`: a view that the
   * next call of any method may move or change.
   */
  stateWords(): Uint32Array {
    const { exports, areas } = this.#place;
    const bytes = this.#model.states.length * (this.lanes >>> 3);
    const at = areas[this.#isSwapped ? 1 : 0];
    return new Uint32Array(exports.memory.buffer, at, bytes >>> 2);
  }

  /** Per 32 lanes, a 1 for each that has not ended; a view of what changes as lanes do. */
  get running(): Readonly<Uint32Array> {
    return this.#running;
  }

  #checkLane(lane: number): void {
    if (Number.isInteger(lane) && lane >= 0 && lane < this.lanes) return;
    throw new RangeError(`lanes are 0 to ${this.lanes - 1}, got ${lane}`);
  }

  // Calls the module as often as needed; `load` brings the stimulus of a call into place.
  #inCalls(
    cycles: number,
    isHeld: boolean,
    response: Uint32Array | undefined,
    load: (done: number, count: number) => void,
  ): void {
    const { exports, buffers } = this.#place;
    const { output } = laneStrides(this.layout, this.#model.lanes);
    let loaded = 0;
    for (let done = 0; done < cycles; ) {
      const count = Math.min(buffers.rows, cycles - done);
      if (!isHeld || loaded === 0) load(done, count);
      loaded = count;
      const ran = this.#call(0, count, isHeld, response === undefined);
      if (response !== undefined) {
        const rows = new Uint32Array(exports.memory.buffer, buffers.response, ran * output);
        response.set(rows, done * output);
      }
      done += ran;
    }
  }

  // From row `first` of the buffers on.
  #call(first: number, cycles: number, isHeld: boolean, isUnobserved: boolean): number {
    const { exports, areas, buffers } = this.#place;
    const { pattern, faults } = this.#model;
    const { input, output } = laneStrides(this.layout, this.#model.lanes);
    const hasFaults = faults.some((list) => list.length > 0);
    if (hasFaults)
      this.#numbers(this.#model.memory.running, this.#running.length).set(this.#running);
    const [current, next] = this.#isSwapped ? [areas[1], areas[0]] : areas;
    const ran = exports.run(
      cycles,
      buffers.stimulus + first * input * 4,
      isHeld ? 0 : input * 4,
      buffers.response + first * output * 4,
      isUnobserved ? 0 : output * 4,
      current,
      next,
      this.#cycles % pattern.length,
    );
    if (ran % 2 === 1) this.#isSwapped = !this.#isSwapped;
    this.#cycles += ran;
    if (hasFaults) this.#dropFaulty();
    return ran;
  }

  // Only the last cycle can be one in which a running lane has no result.
  #dropFaulty(): void {
    const { faults, pattern, memory } = this.#model;
    const cycle = this.#cycles - 1;
    const kind = pattern[cycle % pattern.length]!;
    const parts = this.#running.length;
    const before = faults.slice(0, kind).reduce((sum, list) => sum + list.length, 0);
    const count = faults[kind]!.length;
    const words = this.#numbers(memory.faults + before * parts * 4, count * parts);
    for (let lane = 0; lane < this.lanes; lane++) {
      const part = lane >>> 5;
      if (((this.#running[part]! >>> (lane & 31)) & 1) === 0) continue;
      for (let fault = 0; fault < count; fault++) {
        if (((words[fault * parts + part]! >>> (lane & 31)) & 1) === 0) continue;
        this.#faults.push({ lane, cycle, ...faults[kind]![fault]! });
        this.#running[part]! &= ~(1 << (lane & 31));
        break;
      }
    }
  }

  #copyRows(
    from: Uint32Array,
    first: number,
    stride: number,
    length: number,
    rows: number,
    to: number,
  ): void {
    const target = this.#numbers(to, rows * length);
    if (stride === length || rows === 1) {
      target.set(from.subarray(first, first + rows * length));
      return;
    }
    for (let row = 0; row < rows; row++) {
      const at = first + row * stride;
      target.set(from.subarray(at, at + length), row * length);
    }
  }

  #check(
    cycles: number,
    stimulus: Uint32Array,
    stride: number,
    length: number,
    response: Uint32Array | undefined,
  ): void {
    if (!Number.isSafeInteger(cycles) || cycles < 0) {
      throw new RangeError(`cycles is a count, got ${cycles}`);
    }
    if (stride !== 0 && !(Number.isSafeInteger(stride) && stride >= length)) {
      throw new RangeError(`stimulusStride is 0 or at least ${length}, got ${stride}`);
    }
    if (cycles === 0) return;
    const needed = (cycles - 1) * stride + length;
    if (stimulus.length < needed) {
      throw new RangeError(`stimulus needs ${needed} numbers, got ${stimulus.length}`);
    }
    const { output } = laneStrides(this.layout, this.#model.lanes);
    if (response !== undefined && response.length < cycles * output) {
      throw new RangeError(`response needs ${cycles * output} numbers, got ${response.length}`);
    }
  }

  #numbers(address: number, count: number): Uint32Array {
    return new Uint32Array(this.#place.exports.memory.buffer, address, count);
  }
}
