import { RunFault } from '../engine.js';
import { load } from '../model/load.js';
import type { Model } from '../model/model.js';
import type { SavedState } from '../model/savedState.js';
import { readValue, type Value, writeValue } from '../model/values.js';
import { Recording, type RowShape } from './recording.js';
import { type Signal, shownAtFirst, signalsOf, wordNamed } from './signals.js';
import { rowAt, type Stimulus } from './stimulus.js';
import { Traces } from './traces.js';

/** What the package says of a model beyond the model itself. */
export interface About {
  readonly version: string;
  readonly gates: number;
  readonly registers: number;
  readonly resets: readonly { readonly name: string; readonly active: 0 | 1 }[];
}

/** Cycles of one call of the model, at most; its rows are recorded afterwards. */
const CHUNK = 1024;
/** Time that such a call should take at most, in milliseconds. */
const PIECE_MS = 1;
/** What took less tells little: clocks of browsers are coarse. */
const TELLING_MS = 0.5;

/** The model at work in the page: what goes in, what has been, what is shown. */
export class Session {
  readonly model: Model;
  readonly about: About;
  readonly signals: readonly Signal[];
  readonly recording: Recording;
  readonly traces: Traces;
  readonly threeValued: boolean;
  /** Names of the signals in the timing diagram, from top to bottom. */
  shown: string[] = [];
  stimulus: Stimulus | undefined;
  /** Cycle at which the stimulus began. */
  stimulusStart = 0;
  /** Why no further cycle can be run. */
  fault: string | undefined;
  /** Milliseconds that a cycle took of late, with its recording and marks. */
  cycleMs = 0.01;
  readonly #byName: Map<string, Signal>;
  readonly #inputs: Uint32Array;
  readonly #response: Uint32Array;
  readonly #rows: Uint32Array;

  private constructor(model: Model, viewer: Model, about: About) {
    this.model = model;
    this.about = about;
    const bits = model.outputs.reduce((sum, { width }) => sum + width, 0);
    const inBits = model.inputs.reduce((sum, { width }) => sum + width, 0);
    const words = ((bits + 31) >>> 5) + ((inBits + 31) >>> 5);
    this.threeValued = model.inputWords + model.outputWords > words;
    const { inputWords, outputWords } = model;
    const shape: RowShape = { inputWords, outputWords, threeValued: this.threeValued };
    this.signals = signalsOf(model);
    this.#byName = new Map(this.signals.map((signal) => [signal.name, signal]));
    this.recording = new Recording(shape);
    this.traces = new Traces(viewer, this.recording);
    this.#inputs = new Uint32Array(inputWords);
    this.#rows = new Uint32Array(CHUNK * inputWords);
    this.#response = new Uint32Array(CHUNK * outputWords);
    this.shown = shownAtFirst(this.signals);
    this.#restart();
  }

  /** Loads a model twice: one runs, the other one looks back. */
  static async load(module: WebAssembly.Module, about: About): Promise<Session> {
    return new Session(await load(module), await load(module), about);
  }

  /** Whether a table drives the inputs at present. */
  get isDriven(): boolean {
    return this.stimulus !== undefined && this.#stimulusLeft > 0;
  }

  /** Cycles that the stimulus goes on for. */
  get #stimulusLeft(): number {
    if (this.stimulus === undefined) return 0;
    return this.stimulus.cycles - (this.model.cycle - this.stimulusStart);
  }

  /** Gives an input a new value. */
  write(name: string, value: Value): void {
    this.model.write({ [name]: value });
    this.fault = undefined;
    this.#loadInputs();
    this.traces.forgetNow();
  }

  /** Notes it where the present inputs have no result: nothing can be read then. */
  look(): void {
    if (this.fault !== undefined) return;
    try {
      this.model.read();
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      this.fault = `Cycle ${this.model.cycle} has no result: ${error.message}`;
    }
  }

  /**
   * Lets cycles pass; fewer where one has no result, or where it is past `until`, a moment on the
   * clock of `performance.now`. `visible` of the last are looked at closely.
   */
  advance(cycles: number, visible: number, until = Number.POSITIVE_INFINITY): void {
    const started = performance.now();
    let left = cycles;
    while (left > 0 && this.fault === undefined) {
      // A place to look back from, just before what will be seen.
      if (left <= visible || this.traces.isFar(this.model.cycle)) this.traces.mark(this.model);
      const whole = left > visible ? left - visible : left;
      const done = this.#run(Math.min(whole, this.#piece));
      left -= done;
      if (done === 0 || performance.now() >= until) break;
    }
    this.#learn(cycles - left, performance.now() - started);
  }

  /** Back to power-up; a stimulus begins again. */
  reset(): void {
    this.model.reset();
    this.fault = undefined;
    this.stimulusStart = 0;
    this.#restart();
    this.#applyStimulus();
  }

  /** Goes to a saved state. Throws what `Model.restore` throws. */
  restore(state: SavedState | string): void {
    this.model.restore(state);
    this.fault = undefined;
    this.stimulus = undefined;
    this.#restart();
  }

  /** Lets a table drive the inputs from now on; undefined gives them back. */
  drive(stimulus: Stimulus | undefined): void {
    this.stimulus = stimulus;
    this.stimulusStart = this.model.cycle;
    this.fault = undefined;
    this.#applyStimulus();
  }

  /** The signal of some name, words of memories included; always the same one. */
  signal(name: string): Signal | undefined {
    const known = this.#byName.get(name);
    if (known !== undefined) return known;
    const word = wordNamed(this.model.memories, name);
    if (word !== undefined) this.#byName.set(word.name, word);
    return word;
  }

  /** Puts a signal into the diagram or takes it out. */
  show(name: string, isShown: boolean): void {
    this.shown = this.shown.filter((other) => other !== name);
    if (isShown) this.shown.push(name);
  }

  #restart(): void {
    this.recording.restart(this.model.cycle);
    this.traces.restart();
    this.traces.mark(this.model);
    this.#loadInputs();
  }

  #run(most: number): number {
    const left = this.#stimulusLeft;
    const driven = left > 0 ? this.stimulus : undefined;
    const cycles = driven ? Math.min(most, left) : most;
    const stride = driven ? this.model.inputWords : 0;
    if (driven) this.#fillRows(driven, cycles);
    const rows = driven ? this.#rows : this.#inputs;
    const before = this.model.cycle;
    try {
      this.model.runRows(cycles, rows, this.#response, stride);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      this.fault = `Cycle ${before + error.completed} has no result: ${error.message}`;
    }
    const done = this.model.cycle - before;
    this.recording.add(done, rows, stride, this.#response);
    if (driven) this.#applyStimulus();
    return done;
  }

  get #piece(): number {
    return Math.max(1, Math.min(CHUNK, Math.floor(PIECE_MS / this.cycleMs)));
  }

  #learn(cycles: number, took: number): void {
    if (cycles === 0) return;
    if (cycles < CHUNK && Math.max(took, cycles * this.cycleMs) < TELLING_MS) return;
    this.cycleMs = Math.max(1e-6, this.cycleMs + (took / cycles - this.cycleMs) * 0.3);
  }

  #fillRows({ rows, ...stimulus }: Stimulus, cycles: number): void {
    const { inputWords } = this.model;
    const from = this.model.cycle - this.stimulusStart;
    for (let i = 0; i < cycles; i++) {
      const at = rowAt({ rows, ...stimulus }, from + i) * inputWords;
      this.#rows.set(rows.subarray(at, at + inputWords), i * inputWords);
    }
  }

  // Shows, and settles, what the next row gives.
  #applyStimulus(): void {
    const { stimulus } = this;
    if (stimulus === undefined || stimulus.ends.length === 0) return;
    const { inputWords } = this.model;
    const at = rowAt(stimulus, this.model.cycle - this.stimulusStart) * inputWords;
    const unknownAt = this.threeValued ? at + inputWords / 2 : undefined;
    const row = { words: stimulus.rows, at, unknownAt };
    const values = this.model.inputs.map((port) => [port.name, readValue(row, port)]);
    this.model.write(Object.fromEntries(values));
    this.#loadInputs();
  }

  #loadInputs(): void {
    const { inputWords } = this.model;
    const row = {
      words: this.#inputs,
      at: 0,
      unknownAt: this.threeValued ? inputWords / 2 : undefined,
    };
    for (const port of this.model.inputs) writeValue(row, port, this.model.read(port.name));
  }
}
