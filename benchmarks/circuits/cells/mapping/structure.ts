import type { Definition } from '../../nets.js';
import { type Operator, operators } from '../expression.js';

/** Number of a net within its module; 0 and 1 are the constants of those values. */
export type LocalNet = number;

/** A port with its nets, the least significant first. */
export interface StructurePort {
  readonly name: string;
  readonly role: 'input' | 'output';
  readonly nets: readonly LocalNet[];
}

/** A gate of a module. */
export interface Gate {
  readonly kind: Operator;
  readonly output: LocalNet;
  readonly inputs: readonly LocalNet[];
}

/** A rising-edge flip-flop as the circuits have it: reset active at 1. */
export interface FlipFlop {
  readonly name: string;
  readonly clk: LocalNet;
  readonly d: LocalNet;
  readonly q: LocalNet;
  readonly enable: LocalNet | undefined;
  readonly reset: LocalNet | undefined;
  /** On reset; without one, at power-up. */
  readonly value: 0 | 1;
}

/** An instance of another module. */
export interface Child {
  readonly name: string;
  readonly module: string;
  readonly pins: ReadonlyMap<string, readonly LocalNet[]>;
}

/** A module taken apart. */
export interface Structure {
  readonly name: string;
  readonly ports: readonly StructurePort[];
  /** Names of the nets by number, such as `state[3]`. */
  readonly netNames: readonly string[];
  readonly gates: readonly Gate[];
  readonly flipFlops: readonly FlipFlop[];
  readonly children: readonly Child[];
  /** Pairs of nets that an assignment makes one. */
  readonly joins: readonly (readonly [LocalNet, LocalNet])[];
}

/**
 * The modules of a circuit by name, read from the text that the structural writer gives: one
 * statement a line, in the forms that it uses.
 */
export function structuresOf(top: Definition): ReadonlyMap<string, Structure> {
  const structures = new Map<string, Structure>();
  const pending = [top];
  for (let next = pending.pop(); next !== undefined; next = pending.pop()) {
    if (structures.has(next.name) || flipFlopForm.test(next.name)) continue;
    structures.set(next.name, new StructureReader(next).structure);
    pending.push(...next.parts());
  }
  return structures;
}

// Enable, then reset to 0 or 1, or the value at power-up.
const flipFlopForm = /^dff(e?)([rs01]?)$/;
const pinForm = /\.(\w+)\(([^)]*)\)/g;

class StructureReader {
  readonly structure: Structure;
  readonly #nets = new Map<string, readonly LocalNet[]>();
  readonly #netNames = ['0', '1'];
  readonly #gates: Gate[] = [];
  readonly #flipFlops: FlipFlop[] = [];
  readonly #children: Child[] = [];
  readonly #joins: [LocalNet, LocalNet][] = [];

  constructor(definition: Definition) {
    const ports = definition.ports.map(({ name, width, role }): StructurePort => {
      return { name, role: role as StructurePort['role'], nets: this.#declare(name, width) };
    });
    let isBody = false;
    for (const line of [...definition.lines()].join('\n').split('\n')) {
      if (line === 'endmodule') break;
      if (isBody) this.#statement(line.trim().replace(/;$/, ''));
      if (line === ');') isBody = true;
    }
    this.structure = {
      name: definition.name,
      ports,
      netNames: this.#netNames,
      gates: this.#gates,
      flipFlops: this.#flipFlops,
      children: this.#children,
      joins: this.#joins,
    };
  }

  #declare(name: string, width: number): readonly LocalNet[] {
    const nets = Array.from({ length: width }, (_, i) => {
      return this.#netNames.push(width === 1 ? name : `${name}[${i}]`) - 1;
    });
    this.#nets.set(name, nets);
    return nets;
  }

  #statement(text: string): void {
    const space = text.indexOf(' ');
    const head = text.slice(0, space);
    const rest = text.slice(space + 1);
    if (head === 'wire') this.#wires(rest);
    else if (head === 'assign') this.#assign(rest);
    else if ((operators as readonly string[]).includes(head)) {
      const [output, ...inputs] = rest
        .slice(1, -1)
        .split(', ')
        .map((bit) => this.#expression(bit)[0]!);
      this.#gates.push({ kind: head as Operator, output: output!, inputs });
    } else this.#instance(head, rest);
  }

  #wires(text: string): void {
    const [, high, names] = /^(?:\[(\d+):0\] )?(.*)$/.exec(text)!;
    for (const name of names!.split(', ')) this.#declare(name, Number(high ?? 0) + 1);
  }

  #assign(text: string): void {
    const [target, source] = text.split(' = ').map((part) => this.#expression(part));
    target!.forEach((net, i) => {
      this.#joins.push([net, source![i]!]);
    });
  }

  #instance(module: string, text: string): void {
    const name = text.slice(0, text.indexOf(' '));
    const pins = new Map(
      [...text.matchAll(pinForm)].map(([, pin, nets]) => [pin!, this.#expression(nets!)]),
    );
    const form = flipFlopForm.exec(module);
    if (form === null) {
      this.#children.push({ name, module, pins });
      return;
    }
    const net = (pin: string) => pins.get(pin)?.[0];
    this.#flipFlops.push({
      name,
      clk: net('clk')!,
      d: net('d')!,
      q: net('q')!,
      enable: net('enable'),
      reset: net('reset'),
      value: form[2] === 's' || form[2] === '1' ? 1 : 0,
    });
  }

  /** The nets of an expression as the writer spells it, the least significant first. */
  #expression(text: string): readonly LocalNet[] {
    if (text.startsWith('{')) {
      const parts = text.slice(1, -1).split(', ');
      return parts.toReversed().flatMap((part) => this.#expression(part));
    }
    const number = /^(\d+)'([bh])([0-9a-f]+)$/.exec(text);
    if (number !== null) {
      const value = BigInt(`0${number[2] === 'b' ? 'b' : 'x'}${number[3]}`);
      return Array.from({ length: Number(number[1]) }, (_, i) => Number((value >> BigInt(i)) & 1n));
    }
    const [, name, high, low] = /^(\w+)(?:\[(\d+)(?::(\d+))?\])?$/.exec(text) ?? [];
    const nets = this.#nets.get(name ?? '');
    if (nets === undefined) throw new SyntaxError(`no net of ${text} is declared`);
    return high === undefined ? nets : nets.slice(Number(low ?? high), Number(high) + 1);
  }
}
