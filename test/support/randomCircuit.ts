import fc from 'fast-check';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { type Circuit, Edge, Priority } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { type NetId, NO_NET } from '../../compiler/circuit/ids.js';
import { MemoryBuilding, type MemoryRecipe, memoryRecipe } from './randomMemories.js';

/** What random circuits may contain. All is off or small unless asked for. */
export interface RandomCircuitOptions {
  /** Input ports (default 5) and the width of the widest (default 4). */
  readonly maxInputs?: number;
  readonly maxWidth?: number;
  /** Default 8. */
  readonly maxRegisters?: number;
  /** Default 40. */
  readonly maxGates?: number;
  /** Output ports, each of up to `maxWidth` bits; default 4. */
  readonly maxOutputs?: number;
  /** A second clock port `clk2`; registers on both edges; also behind gating cells; also on the outputs of registers. */
  readonly clocking?: 'oneEdge' | 'edges' | 'gated' | 'divided' | 'twoClocks';
  /** Asynchronous set and reset, made of inputs and of registers before, so that none loops. */
  readonly asynchronous?: boolean;
  /** Latches open in either clock phase or by data; their data comes from no other latch. */
  readonly latches?: boolean;
  /** Gates that read gates behind them, which makes combinational loops. */
  readonly loops?: boolean;
  /** Constants x. Two-valued engines read them as 0. */
  readonly unknowns?: boolean;
  /** Memories that are no registers. */
  readonly memories?: boolean;
}

/** A choice of a net: halved until it is below the number of nets. Of a clock: modulo. */
type Pick = number;

interface PortRecipe {
  readonly width: number;
  readonly isVector: boolean;
  readonly lsb: number;
  readonly ascending: boolean;
}

interface GateRecipe {
  readonly kind: GateKind;
  readonly fanin: readonly Pick[];
}

interface ElementRecipe {
  readonly data: Pick;
  readonly clock: Pick;
  readonly edge: number;
  readonly set: Pick | null;
  readonly reset: Pick | null;
  readonly priority: number;
  readonly initial: number;
}

/** What a random circuit is built from: printed for a counterexample, and fit to be pasted. */
export interface CircuitRecipe {
  readonly clocking: NonNullable<RandomCircuitOptions['clocking']>;
  readonly constants: readonly GateKind[];
  readonly inputs: readonly PortRecipe[];
  readonly registers: readonly ElementRecipe[];
  readonly latches: readonly ElementRecipe[];
  /** Gates in front of latches, and gates that may read latches too. */
  readonly gates: readonly GateRecipe[];
  readonly laterGates: readonly GateRecipe[];
  /** Gates that all others may read and that may read all others. */
  readonly feedback: readonly GateRecipe[];
  readonly memories?: readonly MemoryRecipe[];
  readonly outputs: readonly { readonly port: PortRecipe; readonly nets: readonly Pick[] }[];
}

/**
 * Random circuits with feedback through registers, reconvergence and wide gates, for fast-check;
 * without combinational loops unless asked for. The clock port is `clk`.
 *
 * Shrinks towards few gates, inputs and registers. A counterexample prints its recipe, of which
 * `circuitOf` makes the circuit again.
 */
export function randomCircuit(options: RandomCircuitOptions = {}): fc.Arbitrary<Circuit> {
  return recipe(options).map((made) => {
    const circuit = circuitOf(made);
    const print = { value: () => JSON.stringify(made), enumerable: false };
    return Object.defineProperty(circuit, fc.toStringMethod, print);
  });
}

function recipe(options: RandomCircuitOptions): fc.Arbitrary<CircuitRecipe> {
  const { maxInputs = 5, maxWidth = 4, maxRegisters = 8, maxGates = 40, maxOutputs = 4 } = options;
  // About half of the choices are direct, over all nets; the rest prefers recent nets, so that
  // logic gets deep. Halving keeps a choice's meaning while it shrinks.
  const pick = fc.nat(2 * (maxGates + maxRegisters + 16));
  const gate = gateRecipe(pick);
  const element = elementRecipe(pick, options.asynchronous ?? false);
  const port = portRecipe(maxWidth);
  const output = fc.record({
    port,
    nets: fc.array(pick, { minLength: maxWidth, maxLength: maxWidth }),
  });
  const unknowns = options.unknowns ? [GateKind.Unknown] : [];
  return fc.record({
    clocking: fc.constant(options.clocking ?? 'oneEdge'),
    constants: fc.subarray([GateKind.Zero, GateKind.One, ...unknowns]),
    inputs: list(port, maxInputs),
    registers: list(element, maxRegisters),
    latches: list(element, options.latches ? 4 : 0),
    gates: list(gate, maxGates),
    laterGates: list(gate, options.latches ? maxGates >> 1 : 0),
    feedback: list(gate, options.loops ? 3 : 0),
    memories: list(memoryRecipe(pick), options.memories ? 2 : 0),
    outputs: fc.array(output, { minLength: 1, maxLength: maxOutputs, size: 'max' }),
  });
}

const list = <T>(item: fc.Arbitrary<T>, maxLength: number): fc.Arbitrary<T[]> =>
  fc.array(item, { maxLength, size: 'max' });

const portRecipe = (maxWidth: number): fc.Arbitrary<PortRecipe> =>
  fc
    .record({
      width: fc.integer({ min: 1, max: maxWidth }),
      isVector: fc.boolean(),
      lsb: fc.nat(3),
      ascending: fc.boolean(),
    })
    .map((port) => (port.width > 1 ? { ...port, isVector: true } : port));

function gateRecipe(pick: fc.Arbitrary<Pick>): fc.Arbitrary<GateRecipe> {
  const { Buf, Not, And, Nand, Or, Nor, Xor, Xnor, Mux } = GateKind;
  const gates = (kinds: readonly GateKind[], minLength: number, maxLength: number) =>
    fc.record({
      kind: fc.constantFrom(...kinds),
      fanin: fc.array(pick, { minLength, maxLength }),
    });
  return fc.oneof(
    { weight: 1, arbitrary: gates([Buf, Not], 1, 1) },
    { weight: 6, arbitrary: gates([And, Nand, Or, Nor, Xor, Xnor], 1, 3) },
    { weight: 1, arbitrary: gates([And, Nor, Xor], 4, 11) },
    { weight: 2, arbitrary: gates([Mux], 3, 3) },
  );
}

function elementRecipe(
  pick: fc.Arbitrary<Pick>,
  asynchronous: boolean,
): fc.Arbitrary<ElementRecipe> {
  const control = asynchronous ? fc.option(pick, { nil: null, freq: 2 }) : fc.constant(null);
  return fc.record({
    data: pick,
    clock: pick,
    edge: fc.constantFrom(Edge.Rising, Edge.Falling),
    set: control,
    reset: control,
    priority: fc.constantFrom(Priority.ResetWins, Priority.SetWins),
    initial: fc.constantFrom(2, 0, 1),
  });
}

/** Builds the circuit of a recipe. */
export function circuitOf(made: CircuitRecipe): Circuit {
  return new RecipeBuilder(made).build();
}

class RecipeBuilder {
  readonly #recipe: CircuitRecipe;
  readonly #builder = new CircuitBuilder();
  readonly #names: string[] = [];
  readonly #named: NetId[] = [];
  /** What gates read: a growing list. */
  readonly #nets: NetId[] = [];
  /** Inputs and gates of inputs: what asynchronous controls read. */
  readonly #inputLogic: NetId[] = [];
  #clocks: NetId[] = [];
  #second: NetId | undefined;

  constructor(made: CircuitRecipe) {
    this.#recipe = made;
  }

  build(): Circuit {
    const { constants, inputs, registers, latches, gates, laterGates, feedback } = this.#recipe;
    const clk = this.#net('clk');
    this.#builder.input('clk', [clk]);
    if (this.#recipe.clocking === 'twoClocks') {
      this.#second = this.#net('clk2');
      this.#builder.input('clk2', [this.#second]);
    }
    inputs.forEach((port, i) => {
      this.#addInput(port, `i${i}`);
    });
    // Logic of inputs alone, the controls' source: a few gates made of the same recipes.
    this.#inputLogic.push(...this.#nets);
    if (this.#nets.length > 0) {
      for (const gate of gates.slice(0, 4)) this.#inputLogic.push(this.#addGate(gate, 'c'));
    }
    for (const kind of constants) this.#nets.push(this.#builder.gate(kind, []));
    const registerNets = registers.map((_, i) => this.#net(`q${i}`));
    const latchNets = latches.map((_, i) => this.#net(`l${i}`));
    const feedbackNets = feedback.map((_, i) => this.#net(`f${i}`));
    this.#nets.push(...registerNets, ...feedbackNets);
    if (this.#nets.length === 0) this.#nets.push(this.#builder.gate(GateKind.Zero, []));
    const memories = new MemoryBuilding(this.#builder, this.#recipe.memories ?? []);
    const [pick, name] = [this.#pick.bind(this), this.#net.bind(this)];
    this.#nets.push(...memories.read(false, pick, name));
    for (const gate of gates) this.#nets.push(this.#addGate(gate, 'g'));
    const notClk = this.#drive('notClk', GateKind.Not, [clk]);
    this.#nets.push(...memories.read(true, pick, name));
    latches.forEach((latch, i) => {
      this.#addLatch(latch, latchNets[i]!, [notClk, clk]);
    });
    this.#nets.push(...latchNets);
    for (const gate of laterGates) this.#nets.push(this.#addGate(gate, 'h'));
    feedback.forEach(({ kind, fanin }, i) => {
      const nets = fanin.map((choice) => this.#pick(choice));
      this.#builder.drive(feedbackNets[i]!, kind, nets);
    });
    this.#clocks = this.#clockNets(clk, notClk, registerNets);
    memories.write(pick, this.#clocks, this.#recipe.clocking === 'oneEdge');
    registers.forEach((register, i) => {
      this.#addRegister(register, i, registerNets);
    });
    this.#addOutputs();
    return this.#finish();
  }

  #net(name: string): NetId {
    const net = this.#builder.net();
    this.#names.push(name);
    this.#named.push(net);
    return net;
  }

  #drive(name: string, kind: GateKind, fanin: readonly NetId[]): NetId {
    const net = this.#net(name);
    this.#builder.drive(net, kind, fanin);
    return net;
  }

  #pick(choice: Pick): NetId {
    const { length } = this.#nets;
    let index = length === 1 ? 0 : choice;
    while (index >= length) index = (index + 1) >> 1;
    return this.#nets[index]!;
  }

  #control(choice: Pick | null, earlier: readonly NetId[]): NetId {
    const from = [...this.#inputLogic, ...earlier];
    return choice === null || from.length === 0 ? NO_NET : oneOf(from, choice);
  }

  #addInput(port: PortRecipe, name: string): void {
    const nets = Array.from({ length: port.width }, (_, bit) => this.#net(`${name}_${bit}`));
    this.#nets.push(...nets);
    this.#builder.input(name, nets, rangeOf(port));
  }

  #addGate({ kind, fanin }: GateRecipe, prefix: string): NetId {
    const nets = fanin.map((choice) => this.#pick(choice));
    return this.#drive(`${prefix}${this.#names.length}`, kind, nets);
  }

  #addLatch(latch: ElementRecipe, output: NetId, phases: readonly NetId[]): void {
    this.#builder.latch({
      ...this.#commonPins(latch, output),
      enable: oneOf([...phases, this.#pick(latch.clock)], latch.clock),
    });
  }

  #addRegister(register: ElementRecipe, index: number, outputs: readonly NetId[]): void {
    const { clocking } = this.#recipe;
    const output = outputs[index]!;
    const earlier = outputs.slice(0, index);
    // The first registers sit on the ports themselves, so that these are known as clocks.
    const ports = clocking === 'twoClocks' ? 2 : 1;
    const clock = oneOf(this.#clocks, index < ports ? index : register.clock);
    const edge = clocking === 'oneEdge' ? Edge.Rising : register.edge;
    this.#builder.register({ ...this.#commonPins(register, output, earlier), clock, edge });
  }

  #commonPins(
    { data, set, reset, priority, initial }: ElementRecipe,
    output: NetId,
    earlier: readonly NetId[] = [],
  ) {
    return {
      output,
      data: this.#pick(data),
      set: this.#control(set, earlier),
      reset: this.#control(reset, earlier),
      priority,
      initial,
    };
  }

  #clockNets(clk: NetId, notClk: NetId, registers: readonly NetId[]): NetId[] {
    const { clocking } = this.#recipe;
    if (clocking === 'oneEdge') return [clk];
    if (clocking === 'edges') return [clk, notClk];
    if (this.#second !== undefined) return [clk, this.#second];
    const gated = this.#gatingCell(clk, notClk);
    if (clocking === 'gated') return [clk, notClk, gated];
    return [clk, notClk, gated, ...registers.slice(0, 2)];
  }

  // The latch is open while the clock is low, so that the gate in front of the clock cannot glitch.
  #gatingCell(clk: NetId, notClk: NetId): NetId {
    const open = this.#net('open');
    this.#builder.latch({
      output: open,
      enable: notClk,
      data: this.#nets[this.#nets.length - 1]!,
    });
    return this.#drive('gclk', GateKind.And, [clk, open]);
  }

  #addOutputs(): void {
    this.#recipe.outputs.forEach(({ port, nets }, i) => {
      const bits = nets.slice(0, port.width).map((choice) => this.#pick(choice));
      this.#builder.output(`o${i}`, bits, rangeOf({ ...port, width: bits.length }));
    });
  }

  #finish(): Circuit {
    const signals = this.#names.map((name, offset) => ({
      name,
      msb: 0,
      lsb: 0,
      isVector: false,
      offset,
      width: 1,
    }));
    const { hierarchy } = this.#builder;
    const module = hierarchy.addModule({ name: 'random', signals, bits: signals.length });
    hierarchy.addScope('random', 0, module, this.#named);
    return this.#builder.finish('random');
  }
}

const oneOf = (nets: readonly NetId[], choice: number): NetId => nets[choice % nets.length]!;

function rangeOf({ width, isVector, lsb, ascending }: PortRecipe) {
  if (!isVector) return undefined;
  const far = lsb + width - 1;
  return ascending ? { msb: lsb, lsb: far } : { msb: far, lsb };
}
