import { CircuitBuilder } from '../circuit/builder.js';
import type { Circuit } from '../circuit/circuit.js';
import { GateKind, gateInfo, isGate } from '../circuit/gates.js';
import type { NetId } from '../circuit/ids.js';
import { loopsOf } from '../circuit/loops.js';
import type { Design } from '../compile.js';

/** How the values of some nets follow from few others while outputs are sampled. */
export interface ObservedNets {
  /** Nets to watch: inputs, registers, latches, loops, what memories and tables give. */
  readonly sources: Uint32Array;
  /** Nets that differ in more than inversion, none a clock. */
  readonly values: Uint32Array;
  /** Per net asked for: twice its place in `values`, plus 1 if inverted; -1 for a clock. */
  readonly literalOf: Int32Array;
  /** Per net asked for: twice the clock that it is a copy of, plus 1 if inverted; -1 for most. */
  readonly clockOf: Int32Array;
  /** Gates alone: an input port with `sources`, an output port with `values`. */
  readonly logic: Circuit;
}

/**
 * Finds what must be watched to know the values of some nets, and the logic that gives them.
 *
 * The logic has no state, so that it can be computed for many cycles at once. Nets that are the same
 * but for buffers and inverters share a value; copies of a clock are told apart, since they change
 * while nothing is sampled.
 */
export function observedNets({ circuit, clocks }: Design, nets: ArrayLike<number>): ObservedNets {
  const isCut = cutNets(circuit);
  const clockAt = new Map(clocks.ports.map(({ net }, clock) => [net as number, clock]));
  const places = new Map<number, number>();
  const literalOf = new Int32Array(nets.length).fill(-1);
  const clockOf = new Int32Array(nets.length).fill(-1);
  for (let i = 0; i < nets.length; i++) {
    const { root, inverted } = rootOf(circuit, isCut, nets[i]!);
    const clock = clockAt.get(root);
    if (clock !== undefined) clockOf[i] = 2 * clock + inverted;
    else {
      const place = places.get(root) ?? places.size;
      places.set(root, place);
      literalOf[i] = 2 * place + inverted;
    }
  }
  const values = Uint32Array.from(places.keys());
  return { values, literalOf, clockOf, ...logicOf(circuit, isCut, values) };
}

// A net that is more than a function of its fan-in as it is now.
function cutNets(circuit: Circuit): Uint8Array {
  const { loopOf } = loopsOf(circuit);
  const isCut = Uint8Array.from(circuit.kind, (kind, net) =>
    kind === GateKind.MemoryRead || loopOf[net]! >= 0 || gateInfo(kind).role === 'source' ? 1 : 0,
  );
  for (const net of circuit.tables.output) isCut[net] = 1;
  return isCut;
}

function rootOf({ kind, faninStart, fanin }: Circuit, isCut: Uint8Array, net: number) {
  let [root, inverted] = [net, 0];
  while (isCut[root] === 0 && faninStart[root + 1]! - faninStart[root]! === 1) {
    if (gateInfo(kind[root]!).fold?.inverted) inverted ^= 1;
    root = fanin[faninStart[root]!]!;
  }
  return { root, inverted };
}

function logicOf(
  { name, kind, faninStart, fanin }: Circuit,
  isCut: Uint8Array,
  values: Uint32Array,
) {
  const builder = new CircuitBuilder(values.length);
  const copies = new Map<number, NetId>();
  const sources: number[] = [];
  const pending: number[] = [];
  const copyOf = (net: number): NetId => {
    const known = copies.get(net);
    if (known !== undefined) return known;
    const copy = builder.net();
    copies.set(net, copy);
    (isCut[net] === 1 ? sources : pending).push(net);
    return copy;
  };
  const outputs = Array.from(values, copyOf);
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const ofNet = isGate(kind[net]!) ? fanin.subarray(faninStart[net]!, faninStart[net + 1]!) : [];
    builder.drive(copyOf(net), kind[net] as GateKind, Array.from(ofNet, copyOf));
  }
  builder.input('sources', sources.map(copyOf), { msb: sources.length - 1, lsb: 0 });
  builder.output('values', outputs, { msb: outputs.length - 1, lsb: 0 });
  return { sources: Uint32Array.from(sources), logic: builder.finish(name) };
}
