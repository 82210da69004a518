import { type Circuit, Edge } from '../circuit.js';
import type { ClockPorts } from '../clockPorts.js';
import { GateKind, gateInfo, isGate } from '../gates.js';
import { NO_NET } from '../ids.js';
import { clockPins } from '../memoryPorts.js';
import { gateReaders, type Readers } from '../readers.js';
import { followDividers } from './dividedClocks.js';
import { NO_ROOTS, RootSets } from './rootSets.js';

/** How a clock port gets to the clock pin of a register or the enable of a latch. */
export const ClockPath = {
  /** No clock port does. */
  None: 0,
  /** The pin is on the port's own net. */
  Direct: 1,
  /** Through gates with one input that can change: buffers and inverters. */
  Buffered: 2,
  /** Through gates that other signals have a say in. */
  Gated: 3,
  /** Through registers or latches alone, which makes a divided clock. */
  Divided: 4,
} as const;

/** What the pins of a table of registers or latches hang on, one entry a pin. */
export interface ClockedPins {
  /** A set of clock ports, see `ClockRoots.sets`. */
  readonly roots: Uint32Array;
  /** A `ClockPath`. */
  readonly path: Uint8Array;
}

/** Clock ports, and what in the circuit hangs on them. */
export interface ClockRoots {
  /** Sets of indices into `ClockPorts.ports`. */
  readonly sets: RootSets;
  /** Per net: the clock ports that reach it through gates, as a set. */
  readonly reaching: Uint32Array;
  /** Per net that they reach: 1 where they arrive upright, 2 where inverted, 3 for both. */
  readonly polarity: Uint8Array;
  /** The clock pins of registers. */
  readonly registers: ClockedPins;
  /** The clocks of the write ports of memories, in the order of `memoryWrites`. */
  readonly writes: ClockedPins;
  /** The enable pins of latches; never `Divided`, as an enable that is stored is no clock. */
  readonly latches: ClockedPins;
}

/** Follows each clock port through gates, and on through registers where these make clocks. */
export function clockRootsOf(circuit: Circuit, clocks: ClockPorts): ClockRoots {
  const readers = gateReaders(circuit);
  const sets = new RootSets();
  const { reaching, polarity } = spread(circuit, clocks, readers, sets);
  const paths = new PinPaths(circuit);
  const clocked = (pins: Uint32Array): ClockedPins => {
    const roots = pins.map((pin) => (pin === NO_NET ? NO_ROOTS : reaching[pin]!));
    const path = Uint8Array.from(pins, (pin, entry) =>
      roots[entry] === NO_ROOTS ? ClockPath.None : paths.of(pin),
    );
    return { roots, path };
  };
  const pins = clocked(clockPins(circuit).clock);
  const latches = clocked(circuit.latches.enable);
  const divided = followDividers(circuit, readers, sets, pins.roots, latches.roots);
  for (const pin of divided) pins.path[pin] = ClockPath.Divided;
  const { count } = circuit.registers;
  const registers = { roots: pins.roots.subarray(0, count), path: pins.path.subarray(0, count) };
  const writes = { roots: pins.roots.subarray(count), path: pins.path.subarray(count) };
  return { sets, reaching, polarity, registers, writes, latches };
}

/**
 * The edge of its clock ports that a register captures on: an `Edge`, or -1 where that is not
 * settled, behind an exclusive-or or a divider.
 */
export function portEdge(circuit: Circuit, roots: ClockRoots, register: number): number {
  if (roots.registers.path[register] === ClockPath.Divided) return -1;
  const edge = circuit.registers.edge[register]!;
  const polarity = roots.polarity[circuit.registers.clock[register]!]!;
  if (polarity === UPRIGHT) return edge;
  if (polarity !== INVERTED) return -1;
  return edge === Edge.Rising ? Edge.Falling : Edge.Rising;
}

const UPRIGHT = 1;
const INVERTED = 2;
const BOTH = 3;

function spread(
  circuit: Circuit,
  clocks: ClockPorts,
  { start, reader }: Readers,
  sets: RootSets,
): Pick<ClockRoots, 'reaching' | 'polarity'> {
  const reaching = new Uint32Array(circuit.netCount);
  const polarity = new Uint8Array(circuit.netCount);
  const pending: number[] = [];
  const raise = (net: number, roots: number, arrival: number): void => {
    const union = sets.union(reaching[net]!, roots);
    const both = polarity[net]! | arrival;
    if (union === reaching[net] && both === polarity[net]) return;
    reaching[net] = union;
    polarity[net] = both;
    pending.push(net);
  };
  clocks.ports.forEach(({ net }, port) => {
    raise(net, sets.single(port), UPRIGHT);
  });
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    for (let i = start[net]!; i < start[net + 1]!; i++) {
      const gate = reader[i]!;
      raise(gate, reaching[net]!, arrivalBehind(circuit, gate, net, polarity[net]!));
    }
  }
  return { reaching, polarity };
}

function arrivalBehind(circuit: Circuit, gate: number, input: number, arrival: number): number {
  const { fold } = gateInfo(circuit.kind[gate]!);
  const first = circuit.faninStart[gate]!;
  if (fold === undefined) return circuit.fanin[first] === input ? BOTH : arrival;
  if (fold.operation === 'xor' && circuit.faninStart[gate + 1]! - first > 1) return BOTH;
  if (!fold.inverted || arrival === BOTH) return arrival;
  return arrival === UPRIGHT ? INVERTED : UPRIGHT;
}

/** Tells direct, buffered and gated pins apart; each net is looked at once. */
class PinPaths {
  readonly #circuit: Circuit;
  readonly #known: Uint8Array;

  constructor(circuit: Circuit) {
    this.#circuit = circuit;
    this.#known = new Uint8Array(circuit.netCount);
  }

  of(pin: number): number {
    const known = this.#known;
    const chain: number[] = [];
    let net = pin;
    while (known[net] === ClockPath.None) {
      if (this.#circuit.kind[net] === GateKind.Input) {
        known[net] = ClockPath.Direct;
        break;
      }
      // Stands where the chain ends here, or bites its own tail.
      known[net] = ClockPath.Gated;
      const before = this.#onlySource(net);
      if (before === NO_NET) break;
      chain.push(net);
      net = before;
    }
    const path = known[net] === ClockPath.Gated ? ClockPath.Gated : ClockPath.Buffered;
    for (const each of chain) known[each] = path;
    return known[pin]!;
  }

  /** The one net in a gate's fan-in that is no constant, or `NO_NET`. */
  #onlySource(net: number): number {
    const { kind, faninStart, fanin } = this.#circuit;
    if (!isGate(kind[net]!)) return NO_NET;
    let only: number = NO_NET;
    for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) {
      const source = fanin[i]!;
      if (gateInfo(kind[source]!).role === 'constant') continue;
      if (only !== NO_NET) return NO_NET;
      only = source;
    }
    return only;
  }
}
