import type { PortLayout } from '../layout.js';
import { memoryStateBytes } from '../memoryState.js';
import { type BlockRequest, type BlockResult, BlockRun, checkCycles } from './block.js';
import { type ChangeListener, Changes } from './changes.js';
import { type OutputValues, type Reached, Search } from './condition.js';
import type { Core } from './core.js';
import type { KeptMemory, KeptNet } from './description.js';
import { Nets } from './nets.js';
import { Ports } from './ports.js';
import type { PowerUpOptions } from './powerUp.js';
import { powerUpState } from './powerUp.js';
import { type SavedState, saved, standingOf } from './savedState.js';
import { checkFields, readValue, shown, type Value, writeValue } from './values.js';

interface Parts {
  readonly core: Core;
  readonly ports: Ports;
  readonly nets: Nets;
  readonly changes: Changes;
  readonly powerUp: Uint8Array;
}

/** A condition to run to: values of outputs, or a question asked between two cycles. */
export type Condition = OutputValues | ((model: Model) => boolean);

/**
 * A clocked circuit at work. It is always settled: `read` and `peek` show what follows from the
 * present inputs and the state, which is also what the next cycle's response row would hold. `step`
 * lets the clock tick.
 *
 * `model.d.ts` of a package describes it again, with the names and widths of that netlist.
 */
export class Model {
  /** All that holds memory; gone once disposed of. */
  #parts: Parts | undefined;

  constructor(core: Core, options: PowerUpOptions) {
    const powerUp = powerUpState(core.description, options);
    const ports = new Ports(core.layout);
    this.#parts = { core, ports, nets: new Nets(core), changes: new Changes(core), powerUp };
    core.start(powerUp);
  }

  /** Name of the top module. */
  get name(): string {
    return this.#live.layout.name;
  }

  /** Cycles since power-up. */
  get cycle(): number {
    return this.#live.cycle;
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

  /** Whose words `peek` takes too, as `name[index]`. */
  get memories(): readonly KeptMemory[] {
    return this.#live.description.memories;
  }

  /** Gives inputs new values; those left out keep theirs. */
  write(values: Readonly<Record<string, Value>>): this {
    const { inputs, layout } = this.#live;
    // All or nothing: a value that is refused leaves no other one behind.
    const changed = inputs.slice();
    for (const [name, value] of Object.entries(checkFields(values, 'values of inputs'))) {
      writeValue(this.#live.row(changed, layout.inputs), this.#own.ports.input(name), value);
    }
    inputs.set(changed);
    this.#live.touch();
    this.#own.changes.tell();
    return this;
  }

  /** The value of a port, or without a name those of all outputs. */
  read(): Record<string, Value>;
  read(name: string): Value;
  read(name?: string): Value | Record<string, Value> {
    const { layout } = this.#live;
    if (name === undefined) {
      const { ports } = layout.outputs;
      return Object.fromEntries(ports.map((port) => [port.name, this.#output(port)]));
    }
    const { port, isInput } = this.#own.ports.any(name);
    return isInput ? this.#input(port) : this.#output(port);
  }

  /** Lets cycles pass with the inputs as they are. */
  step(cycles = 1): this {
    this.#telling(() => this.#live.step(checkCycles(cycles)));
    return this;
  }

  /** Runs a block of cycles with new inputs in each and records outputs. */
  run(request: BlockRequest): BlockResult {
    const block = this.block(request);
    return this.#telling(() => {
      while (!block.isDone) block.advance();
      return block.result;
    });
  }

  /**
   * Runs cycles on packed rows: a port's bits stand at its `offset` in a row, a row takes
   * `inputWords` or `outputWords` 32-bit words. With stride 0 the one row holds for all cycles.
   */
  runRows(
    cycles: number,
    stimulus: Uint32Array,
    response?: Uint32Array,
    stride = this.inputWords,
  ): this {
    for (const rows of [stimulus, response ?? stimulus]) {
      if (rows instanceof Uint32Array) continue;
      throw new TypeError(`expected rows in a Uint32Array, got ${shown(rows)}`);
    }
    this.#telling(() => this.#live.run(checkCycles(cycles), stimulus, stride, response));
    return this;
  }

  get inputWords(): number {
    return this.#live.inputStride;
  }

  get outputWords(): number {
    return this.#live.outputStride;
  }

  /** Runs until a condition holds, at most `limit` cycles. */
  runUntil(condition: Condition, limit: number): Reached {
    checkCycles(limit);
    if (typeof condition !== 'function') {
      const search = this.search(condition, limit);
      return this.#telling(() => {
        while (!search.isDone) search.advance();
        return { met: search.met, cycles: search.done };
      });
    }
    return this.#telling(() => {
      for (let cycles = 0; ; cycles++) {
        const met = condition(this);
        if (met || cycles === limit) return { met, cycles };
        this.#live.step(1);
      }
    });
  }

  /** The value of a port, a kept net or a word of a memory (`name[index]`). */
  peek(name: string): Value {
    const { ports, nets } = this.#own;
    return ports.find(name) ? this.read(name) : nets.peek(name);
  }

  /** Where the model stands, as plain data. */
  save(): SavedState {
    return saved(this.#live.description, this.#live.standing());
  }

  /** Goes to where a model of the same netlist stood: what `save` gave, or its JSON text. */
  restore(state: SavedState | string): this {
    const { description, layout } = this.#live;
    const standing = standingOf(description, state, memoryStateBytes(layout));
    this.#telling(() => this.#live.moveTo(standing));
    return this;
  }

  /** Back to power-up: cycle 0, all inputs 0. */
  reset(): this {
    this.#telling(() => this.#live.start(this.#own.powerUp));
    return this;
  }

  /**
   * Tells a listener whenever ports have changed, at the end of each call that changed them; all
   * outputs unless names are given. Returns what ends it.
   */
  subscribe(listener: ChangeListener, names?: readonly string[]): () => void {
    const all = this.#live.layout.outputs.ports.map(({ name }) => name);
    return this.#own.changes.subscribe(this.#own.ports, listener, names ?? all);
  }

  /** Lets go of everything; any later call throws a TypeError. */
  dispose(): void {
    this.#parts?.changes.clear();
    this.#parts = undefined;
  }

  /** A block that is run piece by piece, for `serve`. */
  block(request: BlockRequest): BlockRun {
    return new BlockRun(this.#live, this.#own.ports, request);
  }

  /** A run to a condition that goes on piece by piece, for `serve`. */
  search(values: OutputValues, limit: number): Search {
    return new Search(this.#live, this.#own.ports, values, checkCycles(limit));
  }

  /** Tells listeners what a block or a search has changed. */
  tell(): void {
    this.#own.changes.tell();
  }

  get #own(): Parts {
    if (this.#parts !== undefined) return this.#parts;
    throw new TypeError('expected a live model, got one that has been disposed of');
  }

  get #live(): Core {
    return this.#own.core;
  }

  #input(port: PortLayout): Value {
    return readValue(this.#live.row(this.#live.inputs, this.#live.layout.inputs), port);
  }

  #output(port: PortLayout): Value {
    return readValue(this.#live.row(this.#live.outputs(), this.#live.layout.outputs), port);
  }

  // Whatever happens, listeners hear what has changed.
  #telling<T>(act: () => T): T {
    try {
      return act();
    } finally {
      this.#parts?.changes.tell();
    }
  }
}
