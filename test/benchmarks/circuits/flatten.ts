/** A gate of the flat netlist; nets are numbers, 0 and 1 the constants. */
export interface Gate {
  readonly kind: string;
  readonly output: number;
  readonly inputs: readonly number[];
  /** It stands for one bit of an `assign`. */
  readonly assigned?: boolean;
}

/** A flip-flop of the flat netlist. */
export interface FlipFlop {
  readonly q: number;
  readonly d: number;
  readonly enable: number | undefined;
  readonly reset: number | undefined;
  /** The value on reset, or at power-up. */
  readonly value: number;
}

/** A design without hierarchy; names of nets below the top are hierarchical. */
export interface Flat {
  readonly gates: Gate[];
  readonly flipFlops: FlipFlop[];
  readonly vectors: Map<string, readonly number[]>;
  nets: number;
}

interface ModuleText {
  readonly name: string;
  readonly ports: readonly { readonly name: string; readonly width: number }[];
  readonly statements: readonly string[];
}

type Nets = Map<string, readonly number[]>;

const gateKinds = new Set(['and', 'nand', 'or', 'nor', 'xor', 'xnor', 'not', 'buf']);

/**
 * Reads and flattens the structural Verilog that the generators write, for their tests alone. It
 * shares no code with the writer and knows just the forms it uses; anything else is a SyntaxError.
 */
export function flatten(text: string): Flat {
  const modules = parse(text.replace(/^\/\/.*$/gm, ''));
  const flat: Flat = { gates: [], flipFlops: [], vectors: new Map(), nets: 2 };
  place(flat, modules, [...modules.values()].at(-1)!, '', new Map());
  return flat;
}

function parse(text: string): Map<string, ModuleText> {
  const modules = new Map<string, ModuleText>();
  for (const piece of text.split('endmodule').slice(0, -1)) {
    const [header, ...statements] = piece.split(';').map((s) => s.trim());
    const [, name, list] = matched(/^module (\w+) \(([^)]*)\)$/, header!);
    const ports = list!.split(',').map((port) => {
      const form = /^(?:input|output)(?: reg)?(?: \[(\d+):0\])? (\w+)$/;
      const [, high, portName] = matched(form, port.trim());
      return { name: portName!, width: Number(high ?? 0) + 1 };
    });
    if (modules.has(name!)) throw new SyntaxError(`module ${name} twice`);
    modules.set(name!, { name: name!, ports, statements: statements.filter(Boolean) });
  }
  return modules;
}

function place(
  flat: Flat,
  modules: ReadonlyMap<string, ModuleText>,
  module: ModuleText,
  path: string,
  pins: Nets,
): void {
  const scope: Nets = new Map(pins);
  const declare = (name: string, width: number) => {
    if (scope.has(name)) throw new SyntaxError(`${name} declared twice in ${module.name}`);
    scope.set(
      name,
      Array.from({ length: width }, () => flat.nets++),
    );
  };
  for (const { name, width } of module.ports) if (!pins.has(name)) declare(name, width);
  for (const statement of module.statements) {
    const [, head, rest] = matched(/^(\w+) (.*)$/s, statement);
    if (head === 'wire') {
      const [, high, names] = matched(/^(?:\[(\d+):0\] )?(.*)$/s, rest!);
      for (const name of names!.split(', ')) declare(name, Number(high ?? 0) + 1);
    } else if (head === 'assign') {
      const [target, source] = rest!.split(' = ').map((e) => bitsOf(e, scope));
      requireWidth(source, target!.length, statement);
      for (const [i, output] of target!.entries()) {
        flat.gates.push({ kind: 'buf', output, inputs: [source![i]!], assigned: true });
      }
    } else if (gateKinds.has(head!)) {
      const [output, ...inputs] = rest!
        .slice(1, -1)
        .split(', ')
        .flatMap((e) => bitsOf(e, scope));
      flat.gates.push({ kind: head!, output: output!, inputs });
    } else {
      const child = modules.get(head!);
      if (!child) throw new SyntaxError(`no module ${head} before ${module.name}`);
      const [, name, connections] = matched(/^(\w+) \((.*)\)$/s, rest!);
      const childPins = pinsOf(child, connections!, scope);
      if (/^dff/.test(child.name)) flat.flipFlops.push(flipFlop(child, childPins));
      else place(flat, modules, child, `${path}${name}.`, childPins);
    }
  }
  for (const [name, bits] of scope) flat.vectors.set(path + name, bits);
}

function pinsOf(child: ModuleText, connections: string, scope: Nets): Nets {
  const pins: Nets = new Map();
  for (const [, port, expression] of connections.matchAll(/\.(\w+)\((\{[^}]*\}|[^)]*)\)/g)) {
    pins.set(port!, bitsOf(expression!, scope));
  }
  for (const { name, width } of child.ports) {
    requireWidth(pins.get(name), width, `${child.name}.${name}`);
  }
  return pins;
}

function flipFlop(cell: ModuleText, pins: Nets): FlipFlop {
  const text = cell.statements.join(';');
  const value = /(?:initial q =|if \(reset\) q <=) 1'b([01])/.exec(text)?.[1] ?? '0';
  const pin = (name: string) => pins.get(name)?.[0];
  return {
    q: pin('q')!,
    d: pin('d')!,
    enable: text.includes('if (enable) q <= d') ? pin('enable')! : undefined,
    reset: text.includes('posedge reset') ? pin('reset')! : undefined,
    value: Number(value),
  };
}

// Bits of `{a, b[3], c[7:4], 8'h3f}`, the least significant first.
function bitsOf(expression: string, scope: Nets): readonly number[] {
  const terms = expression.replace(/[{}]/g, '').split(', ').reverse();
  return terms.flatMap((term) => {
    const constant = /^(\d+)'([bh])([\da-f]+)$/.exec(term);
    if (constant) {
      const value = BigInt(`${constant[2] === 'h' ? '0x' : '0b'}${constant[3]}`);
      return Array.from({ length: Number(constant[1]) }, (_, i) =>
        Number((value >> BigInt(i)) & 1n),
      );
    }
    const [, name, high, low] = matched(/^(\w+)(?:\[(\d+)(?::(\d+))?\])?$/, term);
    const net = scope.get(name!);
    if (!net) throw new SyntaxError(`nothing is named ${name}`);
    if (high === undefined) return net;
    const part = net.slice(Number(low ?? high), Number(high) + 1);
    requireWidth(part, Number(high) - Number(low ?? high) + 1, term);
    return part;
  });
}

function requireWidth(bits: readonly number[] | undefined, width: number, where: string): void {
  if (bits?.length !== width) {
    throw new SyntaxError(`expected ${width} bits, got ${bits?.length ?? 'none'}: ${where}`);
  }
}

function matched(form: RegExp, text: string): readonly (string | undefined)[] {
  const match = form.exec(text);
  if (!match) throw new SyntaxError(`not understood: ${text}`);
  return match;
}
