import { flipFlopCell } from './flipFlops.js';
import {
  asBus,
  type Bit,
  type Bus,
  bitsOf,
  bitText,
  busText,
  type Definition,
  isWhole,
  type Net,
  type Size,
} from './nets.js';

/** The gate primitives of IEEE 1364-2005, clauses 7.2 and 7.3. */
export type GateKind = 'and' | 'nand' | 'or' | 'nor' | 'xor' | 'xnor' | 'not' | 'buf';

/** The clock of flip-flops and what else reaches them. */
export interface Clocking {
  readonly clock: Bit;
  readonly enable?: Bit;
  /** Asynchronous, active at 1; brings the flip-flops to `value`, or to 0. */
  readonly reset?: Bit;
  /** Value on reset; without a reset, the value at power-up; bit i is for flip-flop i. */
  readonly value?: bigint;
}

const namesPerLine = 10;

/** A module under construction: its methods add to it, `verilog` writes it. */
export class Module implements Definition {
  readonly name: string;
  readonly ports: Net[] = [];
  readonly #wires = new Set<Net>();
  readonly #parts = new Set<Definition>();
  // Rendered only when written: a net may be renamed until then.
  readonly #statements: (() => string)[] = [];
  readonly #instanceNames: (() => string)[] = [];
  #gates = 0;
  #below: Size = { gates: 0, registers: 0 };

  constructor(name: string) {
    this.name = name;
  }

  /** Declares a scalar input. */
  input(name: string): Bit {
    return this.inputs(name, 1)[0]!;
  }

  /** Declares an input vector. */
  inputs(name: string, width: number): Bus {
    const net: Net = { name, width, role: 'input' };
    this.ports.push(net);
    return bitsOf(net);
  }

  /** Makes `bits` an output: a whole wire becomes the port itself, other bits are assigned to it. */
  output(name: string, bits: Bit | Bus): void {
    const bus = asBus(bits);
    const wire = bus[0]!.net;
    if (isWhole(bus) && this.#wires.delete(wire)) {
      wire.name = name;
      wire.role = 'output';
      this.ports.push(wire);
    } else {
      this.ports.push({ name, width: bus.length, role: 'output' });
      this.#statements.push(() => `assign ${name} = ${busText(bus)};`);
    }
  }

  /** Declares a wire that `flipFlops` will drive, so that the logic before them can use it. */
  wires(name: string, width: number): Bus {
    const net: Net = { name, width, role: 'wire' };
    this.#wires.add(net);
    return bitsOf(net);
  }

  /** Renames the output of a gate. */
  named(name: string, bit: Bit): Bit {
    if (bit.net.role !== 'wire' || bit.net.width !== 1) {
      throw new RangeError(`expected the output of a gate to name ${name}, got ${bitText(bit)}`);
    }
    bit.net.name = name;
    return bit;
  }

  /** Adds a gate and returns its output. */
  gate(kind: GateKind, inputs: Bus): Bit {
    const output = this.wires(`n${this.#gates++}`, 1)[0]!;
    this.#statements.push(() => `${kind} (${[output, ...inputs].map(bitText).join(', ')});`);
    return output;
  }

  /** Adds an `and` gate; each method below likewise adds the gate of its name. */
  and(...inputs: Bit[]): Bit {
    return this.gate('and', inputs);
  }
  nand(...inputs: Bit[]): Bit {
    return this.gate('nand', inputs);
  }
  or(...inputs: Bit[]): Bit {
    return this.gate('or', inputs);
  }
  nor(...inputs: Bit[]): Bit {
    return this.gate('nor', inputs);
  }
  xor(...inputs: Bit[]): Bit {
    return this.gate('xor', inputs);
  }
  xnor(...inputs: Bit[]): Bit {
    return this.gate('xnor', inputs);
  }
  not(input: Bit): Bit {
    return this.gate('not', [input]);
  }

  /** Lets flip-flops with outputs `q` (from `wires`) capture `d`, bit by bit. */
  flipFlops(q: Bus, d: Bus, { clock, enable, reset, value }: Clocking): void {
    requireWidth(`d of ${busText(q)}`, d, q.length);
    const shared: [string, Bus][] = [['clk', [clock]]];
    if (enable) shared.push(['enable', [enable]]);
    if (reset) shared.push(['reset', [reset]]);
    q.forEach((bit, i) => {
      const cell = flipFlopCell({
        enable: enable !== undefined,
        reset: reset !== undefined,
        ...(value !== undefined && { value: (value >> BigInt(i)) & 1n ? 1 : 0 }),
      });
      const suffix = bit.net.width === 1 ? '' : `_${bit.index}`;
      const pins: [string, Bus][] = [...shared, ['d', [d[i]!]], ['q', [bit]]];
      this.#place(cell, () => `ff_${bit.net.name}${suffix}`, pins);
    });
  }

  /**
   * Places `child` with its inputs connected and returns its outputs, wires named `name_port`.
   * Throws a RangeError where an input is missing or has another width.
   */
  instance<Output extends string>(
    child: Definition,
    name: string,
    inputs: Readonly<Record<string, Bit | Bus>>,
  ): Record<Output, Bus> {
    const outputs: Record<string, Bus> = {};
    const pins = child.ports.map((port): [string, Bus] => {
      if (port.role === 'output') {
        const bus = this.wires(`${name}_${port.name}`, port.width);
        outputs[port.name] = bus;
        return [port.name, bus];
      }
      const bus = asBus(inputs[port.name] ?? []);
      requireWidth(`${name}.${port.name}`, bus, port.width);
      return [port.name, bus];
    });
    this.#place(child, () => name, pins);
    return outputs;
  }

  #place(child: Definition, name: () => string, pins: readonly [string, Bus][]): void {
    const { gates, registers } = child.size();
    this.#parts.add(child);
    this.#instanceNames.push(name);
    this.#below = {
      gates: this.#below.gates + gates,
      registers: this.#below.registers + registers,
    };
    this.#statements.push(() => {
      const connections = pins.map(([port, bus]) => `.${port}(${busText(bus)})`);
      return `${child.name} ${name()} (${connections.join(', ')});`;
    });
  }

  /** The definitions this module instantiates, each once. */
  parts(): Iterable<Definition> {
    return this.#parts;
  }

  /** Its gates and registers, with everything below. */
  size(): Size {
    return { ...this.#below, gates: this.#below.gates + this.#gates };
  }

  /** Its Verilog text; throws a RangeError where one name is used twice. */
  *lines(): Iterable<string> {
    this.#requireDistinctNames();
    const ports = this.ports.map((port) => `  ${port.role} ${range(port)}${port.name}`);
    yield `module ${this.name} (\n${ports.join(',\n')}\n);`;
    yield* wireLines(this.#wires);
    for (const statement of this.#statements) yield `  ${statement()}`;
    yield 'endmodule\n';
  }

  #requireDistinctNames(): void {
    const names = new Set<string>();
    const take = (name: string) => {
      if (names.has(name)) throw new RangeError(`${this.name} uses the name ${name} twice`);
      names.add(name);
    };
    for (const port of this.ports) take(port.name);
    for (const wire of this.#wires) take(wire.name);
    for (const name of this.#instanceNames) take(name());
  }
}

function* wireLines(wires: Iterable<Net>): Iterable<string> {
  let scalars: string[] = [];
  for (const wire of wires) {
    if (wire.width > 1) yield `  wire ${range(wire)}${wire.name};`;
    else if (scalars.push(wire.name) === namesPerLine) {
      yield `  wire ${scalars.join(', ')};`;
      scalars = [];
    }
  }
  if (scalars.length > 0) yield `  wire ${scalars.join(', ')};`;
}

function range({ width }: Net): string {
  return width === 1 ? '' : `[${width - 1}:0] `;
}

function requireWidth(what: string, bus: Bus, width: number): void {
  if (bus.length !== width) {
    throw new RangeError(`expected ${width} bits for ${what}, got ${bus.length}`);
  }
}
