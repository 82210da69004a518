import { RunFault, type RunPoint } from '../engine.js';
import { type ModelLayout, rowStride } from '../layout.js';
import type { DescribedModule } from './describedModule.js';
import type { ModelDescription } from './description.js';
import { type BareModel, ModelEngine } from './modelEngine.js';
import type { Row } from './values.js';

/** Where a model stands between two cycles: everything that what follows depends on. */
export interface Standing {
  readonly cycle: number;
  /** State elements: 0, 1 or 2 for x. */
  readonly state: Uint8Array;
  /** Packed row of the present inputs. */
  readonly inputs: Uint32Array;
  /** Packed row of the inputs of the cycle before; undefined if there was none. */
  readonly before: Uint32Array | undefined;
  /** Contents of all memories, as `Engine.memoryState` gives them. */
  readonly memories: Uint8Array;
}

/**
 * A running model in packed rows: the engine, the present inputs, and what they settle to.
 *
 * The rest of the model is made of these operations.
 */
export class Core {
  readonly layout: ModelLayout;
  readonly description: ModelDescription;
  readonly inputStride: number;
  readonly outputStride: number;
  /** Packed row of the present inputs; call `touch` after writing to it. */
  readonly inputs: Uint32Array;
  cycle = 0;
  readonly #engine: ModelEngine;
  readonly #probes: ModelEngine | undefined;
  readonly #outputs: Uint32Array;
  readonly #probed: Uint32Array;
  #before: Uint32Array | undefined;
  #areOutputsFresh = false;
  #areProbesFresh = false;
  #state: Uint8Array | undefined;

  private constructor(
    description: ModelDescription,
    engine: ModelEngine,
    probes: ModelEngine | undefined,
  ) {
    const { layout } = description.model;
    this.layout = layout;
    this.description = description;
    this.inputStride = rowStride(layout.inputs, layout.threeValued);
    this.outputStride = rowStride(layout.outputs, layout.threeValued);
    this.inputs = new Uint32Array(this.inputStride);
    this.#engine = engine;
    this.#probes = probes;
    this.#outputs = new Uint32Array(this.outputStride);
    this.#probed = new Uint32Array(
      probes ? rowStride(probes.layout.outputs, layout.threeValued) : 0,
    );
  }

  /** A new instance of a module; call `start` before anything else. */
  static async create({
    description,
    module,
    probes,
  }: DescribedModule<ModelDescription>): Promise<Core> {
    const instance = (model: BareModel, code: WebAssembly.Module) =>
      ModelEngine.create(model, code);
    const probing = probes && description.probes && (await instance(description.probes, probes));
    return new Core(description, await instance(description.model, module), probing);
  }

  /** Starts from a power-up state with all inputs 0. */
  start(state: Uint8Array): void {
    this.#engine.reset(state);
    this.inputs.fill(0);
    this.#before = undefined;
    this.cycle = 0;
    this.touch();
  }

  /** Says that the present inputs have changed. */
  touch(): void {
    this.#areOutputsFresh = false;
    this.#areProbesFresh = false;
    this.#state = undefined;
  }

  /** Lets cycles pass with the present inputs. Throws `RunFault`; the cycles before it count. */
  step(cycles: number): void {
    this.run(cycles, this.inputs, 0, undefined);
  }

  /** Runs packed rows, see `Engine.run`; the inputs of the last cycle stay. */
  run(
    cycles: number,
    stimulus: Uint32Array,
    stride: number,
    response: Uint32Array | undefined,
  ): void {
    try {
      this.#engine.run(cycles, stimulus, stride, response);
      this.#follow(cycles, stimulus, stride);
    } catch (error) {
      if (error instanceof RunFault) this.#follow(error.completed, stimulus, stride);
      throw error;
    }
  }

  /** Packed row of what the present inputs and the state settle to: what a cycle would sample. */
  outputs(): Uint32Array {
    if (!this.#areOutputsFresh) {
      this.#engine.preview(this.inputs, this.#outputs);
      this.#areOutputsFresh = true;
    }
    return this.#outputs;
  }

  /** Packed row of the kept nets that are no state, at the same moment as `outputs`. */
  probed(): Uint32Array {
    if (!this.#areProbesFresh && this.#probes !== undefined) {
      this.#probes.restore(this.#point(this.standing()));
      this.#probes.run(1, this.inputs, 0, this.#probed);
      this.#areProbesFresh = true;
    }
    return this.#probed;
  }

  /** The state elements: 0, 1 or 2 for x. */
  state(): Uint8Array {
    this.#state ??= this.#engine.state();
    return this.#state;
  }

  /** The contents of all memories, as `ModelEngine.contents` has them. */
  memories(): Uint8Array {
    return this.#engine.contents;
  }

  /** A row of values with the place of its x bits. */
  row(words: Uint32Array, group: { readonly words: number }): Row {
    return { words, at: 0, unknownAt: this.layout.threeValued ? group.words : undefined };
  }

  /** Where the model stands; `moveTo` comes back to it. */
  standing(): Standing {
    return {
      cycle: this.cycle,
      state: this.state(),
      inputs: this.inputs.slice(),
      before: this.#before?.slice(),
      memories: this.#engine.memoryState(),
    };
  }

  /** Goes to where a model of the same netlist stood. Throws RangeError for what does not fit. */
  moveTo(standing: Standing): void {
    this.#engine.restore(this.#point(standing));
    this.inputs.set(standing.inputs);
    this.#before = standing.before?.slice();
    this.cycle = standing.cycle;
    this.touch();
  }

  #point({ cycle, state, before, memories }: Standing): RunPoint {
    return { state, before, memory: memories, position: cycle % this.description.patternLength };
  }

  // Keeps up with cycles that the engine has done.
  #follow(cycles: number, stimulus: Uint32Array, stride: number): void {
    this.touch();
    if (cycles === 0) return;
    const last = (cycles - 1) * stride;
    if (stimulus !== this.inputs) {
      this.inputs.set(stimulus.subarray(last, last + this.inputStride));
    }
    this.#before ??= new Uint32Array(this.inputStride);
    this.#before.set(this.inputs);
    this.cycle += cycles;
  }
}
