import type { LaneFault } from '../../laneEngine.js';
import type { PortLayout } from '../../layout.js';
import { checkCycles } from '../block.js';
import type { OutputValues } from '../condition.js';
import type { KeptMemory, KeptNet } from '../description.js';
import { Nets } from '../nets.js';
import { Ports } from '../ports.js';
import { type PowerUpOptions, powerUpState } from '../powerUp.js';
import { type SavedState, saved, standingOf } from '../savedState.js';
import { checkFields, readValue, type Value, writeValue } from '../values.js';
import { type LaneRequest, type LaneResult, runLanes } from './laneBlock.js';
import type { LaneCore } from './laneCore.js';
import { type LanesReached, runLanesUntil } from './laneSearch.js';

interface Parts {
  readonly core: LaneCore;
  readonly ports: Ports;
  readonly nets: Nets;
  /** One for all lanes, or one for each. */
  readonly powerUp: Uint8Array | readonly Uint8Array[];
}

/**
 * A value for each lane; undefined for one that has ended, and where outputs and nets are read, for
 * one that has no result with its present inputs.
 */
export type EachLane<T> = (T | undefined)[];

/**
 * Many independent sequences of a clocked circuit, side by side: as `Model`, with a lane as the last
 * argument. Where it is left out, all lanes are meant.
 */
export class Lanes {
  #parts: Parts | undefined;
  #looked = 0;

  constructor(core: LaneCore, { seed = 0, ...options }: PowerUpOptions) {
    const { description } = core;
    const one = (lane: number): Uint8Array =>
      powerUpState(description, {
        ...options,
        seed: typeof seed === 'bigint' ? seed + BigInt(lane) : seed + lane,
      });
    const powerUp =
      options.powerUp === 'random' ? Array.from({ length: core.lanes }, (_, i) => one(i)) : one(0);
    const nets = new Nets(core.look(() => this.#looked));
    this.#parts = { core, ports: new Ports(core.layout), nets, powerUp };
    core.start(powerUp);
  }

  /** Name of the top module. */
  get name(): string {
    return this.#live.layout.name;
  }

  /** Sequences that run side by side. */
  get lanes(): number {
    return this.#live.lanes;
  }

  /** Cycles since power-up, as lane 0 counts them. */
  get cycle(): number {
    return this.#live.cycleOf(0);
  }

  /** Lanes that have ended, because a cycle has no result, in the order in which they did. */
  get faults(): readonly LaneFault[] {
    return this.#live.faults;
  }

  /** Ports that tick by themselves. */
  get clocks(): readonly string[] {
    return this.#live.layout.clocks;
  }

  get inputs(): readonly PortLayout[] {
    return this.#live.layout.inputs.ports;
  }

  get outputs(): readonly PortLayout[] {
    return this.#live.layout.outputs.ports;
  }

  /** What `peek` takes beside the ports. */
  get nets(): readonly KeptNet[] {
    return this.#own.nets.list;
  }

  /** None: lanes run no memories. */
  get memories(): readonly KeptMemory[] {
    return this.#live.description.memories;
  }

  /** Gives inputs new values, in one lane or in all; those left out keep theirs. */
  write(values: Readonly<Record<string, Value>>, lane?: number): this {
    const core: LaneCore = this.#live;
    if (lane !== undefined) core.check(lane);
    const given = Object.entries(checkFields(values, 'values of inputs')).map(
      ([name, value]) => [this.#own.ports.input(name), value] as const,
    );
    // All or nothing: `setInputs` takes over no row if one of them throws.
    core.setInputs((before) => {
      const row = before.slice();
      for (const [port, value] of given) {
        writeValue(core.row(row, core.layout.inputs), port, value);
      }
      return row;
    }, lane);
    return this;
  }

  /** The values of a port or of all outputs, in one lane or in all. Throws `RunFault` for an ended lane. */
  read(): Record<string, EachLane<Value>>;
  read(lane: number): Record<string, Value>;
  read(name: string): EachLane<Value>;
  read(name: string, lane: number): Value;
  read(name?: string | number, lane?: number): unknown {
    if (typeof name === 'string') {
      this.#own.ports.any(name);
      return this.#perLane(lane, (each) => this.#port(name, each));
    }
    const core: LaneCore = this.#live;
    if (name !== undefined) core.check(name);
    const { ports } = core.layout.outputs;
    return Object.fromEntries(
      ports.map((port) => [port.name, this.#perLane(name, (each) => this.#port(port.name, each))]),
    );
  }

  /** The value of a port or a kept net, in one lane or in all. */
  peek(name: string): EachLane<Value>;
  peek(name: string, lane: number): Value;
  peek(name: string, lane?: number): Value | EachLane<Value> {
    const { ports, nets } = this.#own;
    return this.#perLane(lane, (each) => {
      if (ports.find(name)) return this.#port(name, each);
      this.#looked = each;
      return nets.peek(name);
    });
  }

  /** Lets cycles pass in all lanes with the inputs as they are. */
  step(cycles = 1): this {
    this.#live.hold(checkCycles(cycles));
    return this;
  }

  /** Runs a block of cycles in all lanes, with new inputs in each, and records outputs. */
  run(request: LaneRequest): LaneResult {
    return runLanes(this.#live, this.#own.ports, request);
  }

  /** Runs until outputs have had certain values in each lane that goes on, at most `limit` cycles. */
  runUntil(values: OutputValues, limit: number): LanesReached {
    return runLanesUntil(this.#live, this.#own.ports, values, checkCycles(limit));
  }

  /** Where a lane stands, as plain data, or where each does. */
  save(): EachLane<SavedState>;
  save(lane: number): SavedState;
  save(lane?: number): SavedState | EachLane<SavedState> {
    const core: LaneCore = this.#live;
    return this.#perLane(
      lane,
      (each) => saved(core.description, core.standing(each)),
      (each) => core.isRunning(each),
    );
  }

  /**
   * Goes to where models of the same netlist stood: one lane, all lanes to the same place, or each
   * to its own of a list. A lane that has ended goes on again.
   */
  restore(state: SavedState | string | readonly (SavedState | string)[], lane?: number): this {
    const core: LaneCore = this.#live;
    if (lane !== undefined) core.check(lane);
    const list = Array.isArray(state) ? state : [state];
    const wanted = lane === undefined ? core.lanes : 1;
    if (Array.isArray(state) && state.length !== wanted) {
      throw new RangeError(`expected ${wanted} saved states, got ${state.length}`);
    }
    const standings = list.map((each) => standingOf(core.description, each, 0));
    const each = Array.from({ length: wanted }, (_, i) => standings[i % standings.length]!);
    core.moveTo(each, lane);
    return this;
  }

  /** Back to power-up, all inputs 0, in one lane or in all. Lanes that have ended go on again. */
  reset(lane?: number): this {
    const { powerUp } = this.#own;
    const core: LaneCore = this.#live;
    if (lane === undefined) {
      core.start(powerUp);
      return this;
    }
    core.check(lane);
    const state = powerUp instanceof Uint8Array ? powerUp : powerUp[lane]!;
    const inputs = new Uint32Array(core.inputStride);
    const standing = { cycle: 0, state, inputs, before: undefined, memories: new Uint8Array(0) };
    core.moveTo([standing], lane);
    return this;
  }

  /** Lets go of everything; any later call throws a TypeError. */
  dispose(): void {
    this.#parts = undefined;
  }

  get #own(): Parts {
    if (this.#parts !== undefined) return this.#parts;
    throw new TypeError('expected a live model, got one that has been disposed of');
  }

  get #live(): LaneCore {
    return this.#own.core;
  }

  #port(name: string, lane: number): Value {
    const core: LaneCore = this.#live;
    const { port, isInput } = this.#own.ports.any(name);
    const { inputs, outputs } = core.layout;
    return isInput
      ? readValue(core.row(core.inputs(lane), inputs), port)
      : readValue(core.row(core.outputs(lane), outputs), port);
  }

  // For one lane what it is, for all of them a list.
  #perLane<T>(
    lane: number | undefined,
    of: (lane: number) => T,
    isThere = (each: number): boolean => this.#live.hasResult(each),
  ): T | EachLane<T> {
    const core: LaneCore = this.#live;
    if (lane !== undefined) {
      core.check(lane);
      core.checkRunning(lane);
      return of(lane);
    }
    return Array.from({ length: core.lanes }, (_, each) => (isThere(each) ? of(each) : undefined));
  }
}
