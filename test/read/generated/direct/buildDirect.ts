import { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import { type Circuit, Edge, Priority } from '../../../../compiler/circuit/circuit.js';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import { type NetId, NO_NET } from '../../../../compiler/circuit/ids.js';
import type {
  Control,
  Design,
  Instance,
  Latch,
  Module,
  Piece,
  Register,
  Signal,
} from '../design/model.js';
import { buildOf } from './operations.js';
import { type Bits, WordLogic } from './wordLogic.js';

/** Builds the circuit of a design, without any text in between. */
export function buildDirect({ top }: Design): Circuit {
  const builder = new CircuitBuilder();
  const nets = new Map<Signal, Bits>();
  for (const port of [top.clock, top.reset, ...top.inputs]) {
    const bits = netsFor(builder, port);
    nets.set(port, bits);
    builder.input(port.name, bits, rangeOf(port));
  }
  for (const port of top.outputs) nets.set(port, netsFor(builder, port));
  const logic = new WordLogic(builder);
  new InstanceBuilder(builder, logic, top, nets, top.parameterValue).build('top', 0);
  for (const port of top.outputs) builder.output(port.name, nets.get(port)!, rangeOf(port));
  return builder.finish(top.name);
}

const netsFor = (builder: CircuitBuilder, { width }: Signal): Bits =>
  Array.from({ length: width }, () => builder.net());

const rangeOf = ({ msb, lsb, isVector }: Signal) => (isVector ? { msb, lsb } : undefined);

/** One instance of a module; the nets of its ports are known. */
class InstanceBuilder {
  readonly #builder: CircuitBuilder;
  readonly #logic: WordLogic;
  readonly #module: Module;
  readonly #nets: Map<Signal, Bits>;

  constructor(
    builder: CircuitBuilder,
    logic: WordLogic,
    module: Module,
    nets: Map<Signal, Bits>,
    parameter: number,
  ) {
    this.#builder = builder;
    this.#logic = logic;
    this.#module = module;
    this.#nets = nets;
    nets.set(module.parameter, logic.constant(parameter, 4));
    for (const signal of module.inner) nets.set(signal, netsFor(builder, signal));
  }

  build(name: string, parent: number): void {
    const scope = this.#addScope(name, parent);
    for (const item of this.#module.items) {
      if (item.kind === 'register') this.#register(item);
      else if (item.kind === 'latch') this.#latch(item);
      else if (item.kind === 'instance') this.#instances(item, scope);
      else {
        const pieces = item.pieces.map((piece) => this.#bits(piece));
        const made = buildOf[item.operator](this.#logic, pieces, item.value);
        for (const [i, net] of this.#nets.get(item.target)!.entries()) {
          this.#builder.drive(net, GateKind.Buf, [made[i]!]);
        }
      }
    }
  }

  /** Names for the registers: the nets of an instance's ports have the outer name too. */
  #addScope(name: string, parent: number): number {
    const { clock, reset, inputs, outputs, inner } = this.#module;
    let offset = 0;
    const nets: NetId[] = [];
    const signals = [clock, reset, ...inputs, ...outputs, ...inner].map((signal) => {
      const { name: own, msb, lsb, isVector, width } = signal;
      nets.push(...this.#nets.get(signal)!);
      offset += width;
      return { name: own, msb, lsb, isVector, width, offset: offset - width };
    });
    const { hierarchy } = this.#builder;
    const module = hierarchy.addModule({ name: this.#module.name, signals, bits: offset });
    return hierarchy.addScope(name, parent, module, nets);
  }

  #bits({ signal, low, width, zeros }: Piece): Bits {
    const bits = this.#nets.get(signal)!.slice(low, low + width);
    return [...bits, ...this.#logic.constant(0, zeros)];
  }

  #instances(item: Instance, scope: number): void {
    const { module, count, name, inputs, targets, parameter } = item;
    for (let element = 0; element < count; element++) {
      const nets = new Map<Signal, Bits>();
      nets.set(module.clock, this.#nets.get(this.#module.clock)!);
      nets.set(module.reset, this.#nets.get(this.#module.reset)!);
      for (const [i, port] of module.inputs.entries()) {
        const bits = this.#bits(inputs[i]!);
        const from = bits.length === port.width ? 0 : element * port.width;
        nets.set(port, bits.slice(from, from + port.width));
      }
      for (const [i, port] of module.outputs.entries()) {
        const from = element * port.width;
        nets.set(port, this.#nets.get(targets[i]!)!.slice(from, from + port.width));
      }
      const value = parameter ?? module.parameterValue;
      const inner = new InstanceBuilder(this.#builder, this.#logic, module, nets, value);
      inner.build(count === 1 ? name : `${name}[${element}]`, scope);
    }
  }

  #latch({ target, data, level }: Latch): void {
    const [clock] = this.#nets.get(this.#module.clock)!;
    const enable = level === 1 ? clock! : this.#logic.not([clock!])[0]!;
    const bits = this.#bits(data);
    for (const [i, output] of this.#nets.get(target)!.entries()) {
      this.#builder.latch({ output, enable, data: bits[i]! });
    }
  }

  #register({ target, data, isFalling, enable, clear, controls, initial }: Register): void {
    const logic = this.#logic;
    const [clock] = this.#nets.get(this.#module.clock)!;
    const outputs = this.#nets.get(target)!;
    let next = this.#bits(data);
    if (enable !== undefined) next = logic.mux(this.#bits(enable)[0]!, next, outputs);
    if (clear !== undefined) {
      const value = logic.constant(clear.value, target.width);
      next = logic.mux(this.#bits(clear.by)[0]!, value, next);
    }
    for (const [i, output] of outputs.entries()) {
      this.#builder.register({
        output,
        clock: clock!,
        data: next[i]!,
        edge: isFalling ? Edge.Falling : Edge.Rising,
        ...this.#asynchronous(controls, i),
        ...(initial !== undefined && { initial: (initial >> i) & 1 }),
      });
    }
  }

  #asynchronous(controls: readonly Control[], bit: number) {
    const bitOf = ({ value }: Control): number => (value >> bit) & 1;
    const allWith = (value: 0 | 1): NetId => {
      const nets = controls
        .filter((each) => bitOf(each) === value)
        .map((each) => this.#active(each));
      return nets.length === 0 ? NO_NET : this.#logic.gate(GateKind.Or, nets);
    };
    const first = controls[0];
    const priority = first && bitOf(first) === 1 ? Priority.SetWins : Priority.ResetWins;
    return { set: allWith(1), reset: allWith(0), priority };
  }

  #active({ bit, level }: Control): NetId {
    const net = this.#nets.get(this.#module.reset)![bit]!;
    return level === 1 ? net : this.#logic.not([net])[0]!;
  }
}
