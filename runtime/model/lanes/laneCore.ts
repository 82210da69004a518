import { type Fault, RunFault } from '../../engine.js';
import { LaneEngine, type LaneFault } from '../../laneEngine.js';
import { LaneRows } from '../../laneRows.js';
import { type ModelLayout, rowStride } from '../../layout.js';
import type { Standing } from '../core.js';
import type { DescribedModule } from '../describedModule.js';
import type { LaneDescription } from '../description.js';
import { ModelEngine } from '../modelEngine.js';
import type { Looked } from '../nets.js';
import { type Row, shown } from '../values.js';

/**
 * Many sequences side by side in packed rows: the engine, the present inputs of each lane, and what
 * they settle to. What `Core` is for one sequence.
 */
export class LaneCore {
  readonly layout: ModelLayout;
  readonly description: LaneDescription;
  readonly lanes: number;
  readonly inputStride: number;
  readonly outputStride: number;
  /** For lane rows of the inputs. */
  readonly into: LaneRows;
  /** For lane rows of the outputs. */
  readonly out: LaneRows;
  readonly #engine: LaneEngine;
  readonly #probes: ModelEngine | undefined;
  /** Packed rows, which are never written to again. */
  #inputs: readonly Uint32Array[];
  #before: readonly (Uint32Array | undefined)[] = [];
  /** What each lane counts beyond the cycles of the engine. */
  #ahead: number[] = [];
  #heldRow: Uint32Array | undefined;
  #outputRow: Uint32Array | undefined;
  #outputs: readonly Uint32Array[] | undefined;
  /** Lanes that have no result with the present inputs. */
  #failing: ReadonlyMap<number, Fault> = new Map();

  private constructor(
    description: LaneDescription,
    engine: LaneEngine,
    probes: ModelEngine | undefined,
  ) {
    const { layout } = description.model;
    const { inputs, outputs, threeValued } = layout;
    this.layout = layout;
    this.description = description;
    this.lanes = description.lanes;
    this.inputStride = rowStride(inputs, threeValued);
    this.outputStride = rowStride(outputs, threeValued);
    this.#engine = engine;
    this.#probes = probes;
    this.into = new LaneRows(inputs, threeValued, description.lanes);
    this.out = new LaneRows(outputs, threeValued, description.lanes);
    this.#inputs = this.#each(new Uint32Array(this.inputStride));
  }

  /** A new instance of a module; call `start` before anything else. */
  static async create({
    description,
    module,
    probes,
  }: DescribedModule<LaneDescription>): Promise<LaneCore> {
    const engine = await LaneEngine.create(description.model, module);
    const probing =
      probes && description.probes && (await ModelEngine.create(description.probes, probes));
    return new LaneCore(description, engine, probing);
  }

  /** Lanes that have ended, in the order in which they did. */
  get faults(): LaneFault[] {
    return this.#engine.faults.map((fault) => ({
      ...fault,
      cycle: fault.cycle + this.#ahead[fault.lane]!,
    }));
  }

  /** Cycles of the engine, which all lanes have in common. */
  get ticks(): number {
    return this.#engine.cycles;
  }

  /** The lanes that have ended, each with the cycle of the engine in which it did. */
  ends(): [lane: number, tick: number][] {
    return this.#engine.faults.map(({ lane, cycle }) => [lane, cycle]);
  }

  /** Cycles since power-up as a lane counts them; of one that has ended, those with a result. */
  cycleOf(lane: number): number {
    const fault = this.#engine.faults.find((found) => found.lane === lane);
    return (fault?.cycle ?? this.#engine.cycles) + this.#ahead[lane]!;
  }

  /** Starts all lanes from power-up, all inputs 0; from one state, or each from its own. */
  start(states: Uint8Array | readonly Uint8Array[]): void {
    this.#engine.reset(states);
    this.#inputs = this.#each(new Uint32Array(this.inputStride));
    this.#before = this.#each(undefined);
    this.#ahead = this.#each(0);
    this.#touch();
  }

  /** Throws RangeError for what is no lane. */
  check(lane: unknown): asserts lane is number {
    if (Number.isInteger(lane) && (lane as number) >= 0 && (lane as number) < this.lanes) return;
    throw new RangeError(`expected a lane from 0 to ${this.lanes - 1}, got ${shown(lane)}`);
  }

  /** Whether a lane has not ended. */
  isRunning(lane: number): boolean {
    return ((this.#engine.running[lane >>> 5]! >>> (lane & 31)) & 1) === 1;
  }

  /** Whether a lane goes on and has a result with its present inputs. */
  hasResult(lane: number): boolean {
    return this.isRunning(lane) && !this.failing().has(lane);
  }

  /** Throws `RunFault` for a lane that has ended. */
  checkRunning(lane: number): void {
    const fault = this.#engine.faults.find((found) => found.lane === lane);
    if (fault) throw new RunFault(0, fault);
  }

  /** The packed row of a lane's present inputs; not to be written to. */
  inputs(lane: number): Uint32Array {
    return this.#inputs[lane]!;
  }

  /** Gives one lane, or all of them, other inputs. */
  setInputs(row: (before: Uint32Array) => Uint32Array, lane?: number): void {
    this.#inputs = this.#inputs.map((before, i) =>
      lane === undefined || lane === i ? row(before) : before,
    );
    this.#touch();
  }

  /** Runs cycles with the present inputs. `response` takes lane rows. */
  hold(cycles: number, response?: Uint32Array): void {
    this.#engine.run(cycles, this.heldRow(), 0, response);
    this.#follow(cycles, () => this.#inputs);
  }

  /** Lane row of the present inputs; not to be written to. */
  heldRow(): Uint32Array {
    this.#heldRow ??= this.into.pack(this.#inputs, 1);
    return this.#heldRow;
  }

  /** Runs cycles with lane rows. */
  run(cycles: number, rows: Uint32Array, response?: Uint32Array): void {
    this.#engine.run(cycles, rows, this.into.stride, response);
    this.#heldRow = undefined;
    const last = rows.subarray((cycles - 1) * this.into.stride);
    this.#follow(cycles, () => this.into.unpackAll(last, 1));
  }

  /** Lane row of what the present inputs and the states settle to. */
  outputRow(): Uint32Array {
    if (this.#outputRow === undefined) {
      this.#outputRow = new Uint32Array(this.out.stride);
      const failing = this.#engine.preview(this.heldRow(), this.#outputRow);
      this.#failing = new Map(failing.map((fault) => [fault.lane, fault]));
    }
    return this.#outputRow;
  }

  /** Lanes that have no result with the present inputs. */
  failing(): ReadonlyMap<number, Fault> {
    this.outputRow();
    return this.#failing;
  }

  /** The packed row of a lane's outputs. Throws `RunFault` where there is no result. */
  outputs(lane: number): Uint32Array {
    this.checkRunning(lane);
    const fault = this.failing().get(lane);
    if (fault) throw new RunFault(0, fault);
    this.#outputs ??= this.out.unpackAll(this.outputRow(), 1);
    return this.#outputs[lane]!;
  }

  /** A row of values with the place of its x bits. */
  row(words: Uint32Array, group: { readonly words: number }): Row {
    return { words, at: 0, unknownAt: this.layout.threeValued ? group.words : undefined };
  }

  /** What `Nets` looks at in a lane. */
  look(lane: () => number): Looked {
    const { layout, description } = this;
    return {
      layout,
      description,
      row: (words, group) => this.row(words, group),
      memories: () => new Uint8Array(0),
      state: () => this.#engine.state(lane()),
      probed: () => this.#probed(lane()),
    };
  }

  /** Where a lane stands; a model of one sequence goes on from there as well. */
  standing(lane: number): Standing {
    return {
      cycle: this.cycleOf(lane),
      state: this.#engine.state(lane),
      inputs: this.#inputs[lane]!.slice(),
      before: this.#before[lane]?.slice(),
      memories: new Uint8Array(0),
    };
  }

  /**
   * Goes to where models of the same netlist stood, in one lane or in all. Throws RangeError where
   * the clocks, which tick for all lanes at once, would have to stand elsewhere.
   */
  moveTo(standings: readonly Standing[], lane?: number): void {
    const { patternLength } = this.description;
    const ticks = lane === undefined ? standings[0]!.cycle : this.#engine.cycles;
    for (const { cycle } of standings) {
      if ((cycle - ticks) % patternLength === 0) continue;
      const phase = `${ticks % patternLength} more than a multiple of ${patternLength}`;
      throw new RangeError(
        `expected a state of a cycle that is ${phase}, since clocks tick in all lanes at once, ` +
          `got cycle ${cycle}`,
      );
    }
    this.#engine.cycles = ticks;
    const [inputs, before] = [[...this.#inputs], [...this.#before]];
    for (const [i, standing] of standings.entries()) {
      const at = lane ?? i;
      this.#engine.restore(at, standing.state, standing.before);
      inputs[at] = standing.inputs;
      before[at] = standing.before;
      this.#ahead[at] = standing.cycle - ticks;
    }
    this.#inputs = inputs;
    this.#before = before;
    this.#touch();
  }

  #probed(lane: number): Uint32Array {
    const { state, before, memories, cycle } = this.standing(lane);
    const position = cycle % this.description.patternLength;
    const { outputs, threeValued } = this.#probes!.layout;
    const row = new Uint32Array(rowStride(outputs, threeValued));
    this.#probes!.restore({ state, before, memory: memories, position });
    this.#probes!.run(1, this.#inputs[lane]!, 0, row);
    return row;
  }

  #follow(cycles: number, inputs: () => readonly Uint32Array[]): void {
    this.#outputRow = undefined;
    this.#outputs = undefined;
    if (cycles === 0) return;
    this.#inputs = inputs();
    this.#before = this.#inputs;
  }

  #touch(): void {
    this.#heldRow = undefined;
    this.#outputRow = undefined;
    this.#outputs = undefined;
  }

  #each<T>(value: T): T[] {
    return new Array<T>(this.lanes).fill(value);
  }
}
