import {
  CircuitBuilder,
  type LatchPins,
  type RegisterPins,
} from '../../compiler/circuit/builder.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind, gateTable } from '../../compiler/circuit/gates.js';
import type { Signal } from '../../compiler/circuit/hierarchy.js';
import type { NetId } from '../../compiler/circuit/ids.js';

interface SmallControls {
  readonly set?: string;
  readonly reset?: string;
  readonly priority?: number;
  readonly initial?: number;
}

/** Pins of a register by net name; see `RegisterPins`. */
export interface SmallRegister extends SmallControls {
  readonly clock: string;
  readonly data: string;
  readonly edge?: number;
}

/** Pins of a latch by net name; see `LatchPins`. */
export interface SmallLatch extends SmallControls {
  readonly enable?: string;
  readonly data?: string;
}

/** A circuit written out with names, for tests that a reader can follow by hand. */
export interface SmallCircuit {
  /** `a`, or `v[3:0]` for a vector whose bits are the nets `v[3]` … `v[0]`. */
  readonly inputs: readonly string[];
  readonly outputs: readonly string[];
  /** Net name to gate name and fan-in, in one string: `y: 'nand a b'`; also `zero`, `mux s a b`. */
  readonly gates?: Readonly<Record<string, string>>;
  readonly registers?: Readonly<Record<string, SmallRegister>>;
  readonly latches?: Readonly<Record<string, SmallLatch>>;
}

/** Builds a circuit in which every net has its name, in the order in which names first appear. */
export function smallCircuit(spec: SmallCircuit): Circuit {
  const builder = new CircuitBuilder();
  const nets = new Map<string, NetId>();
  const net = (name: string): NetId => {
    const known = nets.get(name);
    if (known !== undefined) return known;
    const made = builder.net();
    nets.set(name, made);
    return made;
  };
  const pins = (named: SmallRegister | SmallLatch) =>
    Object.fromEntries(
      Object.entries(named).map(([pin, to]) => [pin, typeof to === 'string' ? net(to) : to]),
    );
  for (const text of spec.inputs) addPort(text, net, builder.input.bind(builder));
  for (const [name, register] of Object.entries(spec.registers ?? {})) {
    builder.register({ output: net(name), ...pins(register) } as unknown as RegisterPins);
  }
  for (const [name, latch] of Object.entries(spec.latches ?? {})) {
    builder.latch({ output: net(name), ...pins(latch) } as LatchPins);
  }
  for (const [name, text] of Object.entries(spec.gates ?? {})) {
    const [gate, ...fanin] = text.split(' ');
    builder.drive(net(name), gateNamed(gate!), fanin.map(net));
  }
  for (const text of spec.outputs) addPort(text, net, builder.output.bind(builder));
  nameNets(builder, nets);
  return builder.finish('small');
}

type AddPort = (name: string, nets: NetId[], range?: { msb: number; lsb: number }) => void;

function addPort(text: string, net: (name: string) => NetId, add: AddPort): void {
  const [, name, left, right] = /^(\w+)(?:\[(\d+):(\d+)\])?$/.exec(text)!;
  if (left === undefined) {
    add(text, [net(text)]);
    return;
  }
  const msb = Number(left);
  const lsb = Number(right);
  const step = lsb <= msb ? 1 : -1;
  const bits: NetId[] = [];
  for (let i = lsb; i !== msb + step; i += step) bits.push(net(`${name}[${i}]`));
  add(name!, bits, { msb, lsb });
}

const gateNamed = (name: string): GateKind => {
  const kind = Object.values(GateKind).find((k) => gateTable[k].name === name);
  if (kind === undefined) throw new RangeError(`no gate is named ${name}`);
  return kind;
};

function nameNets(builder: CircuitBuilder, nets: ReadonlyMap<string, NetId>): void {
  const signals = Array.from(
    nets.keys(),
    (name, offset): Signal => ({ name, msb: 0, lsb: 0, isVector: false, offset, width: 1 }),
  );
  const module = builder.hierarchy.addModule({ name: 'small', signals, bits: signals.length });
  builder.hierarchy.addScope('small', 0, module, Array.from(nets.values()));
}
