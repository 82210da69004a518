import type { Circuit, Port } from './circuit.js';
import { Edge } from './circuit.js';
import { isClockName } from './clockNames.js';
import { directSources, INVERTED, NOT_DIRECT } from './directSources.js';
import { GateKind, isGate } from './gates.js';
import { declaredIndex, netName, primaryNames } from './hierarchy.js';
import { type NetId, NO_NET, netId } from './ids.js';
import { gateReaders, type Readers } from './readers.js';
import { capturingPins } from './tables/tableClocks.js';

/** An input bit that ticks by itself. */
export interface ClockPort {
  /** Name of the port, `clocks[2]` for a bit of a vector. */
  readonly name: string;
  readonly net: NetId;
  /** The level at which inputs are applied and outputs sampled. */
  readonly inactive: 0 | 1;
}

/** What `findClockPorts` found. */
export interface ClockPorts {
  /** In declaration order. */
  readonly ports: readonly ClockPort[];
  /** Clocks that are only guessed: one gate joins them and no name tells which is the clock. */
  readonly ambiguous: readonly string[];
  /** Inputs that reach a clock pin through gates and are taken as data: enables of gated clocks. */
  readonly gating: readonly string[];
}

/**
 * Finds the input bits that clock the circuit.
 *
 * A clock is an input that reaches a register's clock pin through buffers and inverters alone. So
 * is, if its name says clock, one that reaches a latch enable that way and a clock pin through
 * gates (the latch of a gating cell), or a latch enable in a circuit without registers.
 *
 * For clock pins that hang on none of these, the inputs of the logic in front of them are searched
 * for clock names; then, where a pin hangs on no register either, for inputs that enable a latch
 * directly; then all of them are taken.
 *
 * `named` settles it instead: the clocks are those ports or bits. Throws RangeError for a name
 * that is no input bit.
 *
 * A clock's inactive level is 0, or 1 where all registers and latches that it reaches through
 * buffers and inverters store on its falling edge (a latch when it closes).
 */
export function findClockPorts(circuit: Circuit, named?: readonly string[]): ClockPorts {
  const bits = inputBits(circuit);
  const direct = directSources(circuit);
  const search = new ClockSearch(circuit, direct, bits);
  const ambiguous: string[] = [];
  if (named) for (const name of named) search.accept(bitNamed(bits, name));
  else ambiguous.push(...search.run());
  const ports: ClockPort[] = [];
  const gating: string[] = [];
  for (const { name, net } of bits) {
    if (search.isClock(net))
      ports.push({ name, net, inactive: inactiveLevel(circuit, direct, net) });
    else if (search.reachesClockPin(net)) gating.push(name);
  }
  return { ports, ambiguous, gating };
}

interface InputBit {
  readonly name: string;
  readonly net: NetId;
}

function inputBits(circuit: Circuit): InputBit[] {
  const bits: InputBit[] = [];
  const inPort = new Uint8Array(circuit.netCount);
  for (const port of circuit.inputs) {
    port.nets.forEach((net, bit) => {
      bits.push({ name: portBitName(port, bit), net: netId(net) });
      inPort[net] = 1;
    });
  }
  // Text forms without a clock port give the registers an input net of their own.
  let names: Int32Array | undefined;
  for (let net = 0; net < circuit.netCount; net++) {
    if (circuit.kind[net] !== GateKind.Input || inPort[net]) continue;
    names ??= primaryNames(circuit.hierarchy, circuit.netCount);
    const name = names[net]! < 0 ? 'clock' : netName(circuit.hierarchy, names, net);
    bits.push({ name, net: netId(net) });
  }
  return bits;
}

/** `port`, or `port[index]` for a bit, counted from the right, of a vector. */
export function portBitName(port: Port, bit: number): string {
  if (!port.isVector) return port.name;
  return `${port.name}[${declaredIndex({ ...port, offset: 0, width: port.nets.length }, bit)}]`;
}

function bitNamed(bits: readonly InputBit[], name: string): NetId {
  const found = bits.find((bit) => bit.name === name);
  if (found) return found.net;
  throw new RangeError(`no input bit is named ${name}; got ${bits.map((b) => b.name).join(', ')}`);
}

function inactiveLevel(circuit: Circuit, direct: Uint32Array, clock: NetId): 0 | 1 {
  const { latches } = circuit;
  const pins = capturingPins(circuit);
  let stored = 0;
  for (let i = 0; i < pins.clock.length; i++) {
    const source = direct[pins.clock[i]!]!;
    if (source >>> 1 !== clock) continue;
    if ((pins.edge[i] === Edge.Falling) === ((source & INVERTED) !== 0)) return 0;
    stored++;
  }
  for (let i = 0; i < latches.count; i++) {
    const source = latches.enable[i] === NO_NET ? NOT_DIRECT : direct[latches.enable[i]!]!;
    if (source >>> 1 !== clock) continue;
    if ((source & INVERTED) !== 0) return 0;
    stored++;
  }
  return stored > 0 ? 1 : 0;
}

/** The marks on nets by which clocks are told from data. */
class ClockSearch {
  readonly #circuit: Circuit;
  readonly #direct: Uint32Array;
  readonly #bits: readonly InputBit[];
  readonly #readers: Readers;
  readonly #clockPins: Uint32Array;
  readonly #isClock: Uint8Array;
  /** 1 for nets in front of a register's clock pin, through gates. */
  readonly #inFront: Uint8Array;
  /** 1 for nets that a clock reaches through gates. */
  readonly #clocked: Uint8Array;

  constructor(circuit: Circuit, direct: Uint32Array, bits: readonly InputBit[]) {
    this.#circuit = circuit;
    this.#direct = direct;
    this.#bits = bits;
    this.#readers = gateReaders(circuit);
    this.#isClock = new Uint8Array(circuit.netCount);
    this.#clockPins = capturingPins(circuit).clock;
    this.#inFront = coneOf(circuit, this.#clockPins);
    this.#clocked = new Uint8Array(circuit.netCount);
  }

  isClock(net: NetId): boolean {
    return this.#isClock[net] === 1;
  }

  reachesClockPin(net: NetId): boolean {
    return this.#inFront[net] === 1;
  }

  accept(net: NetId): void {
    this.#isClock[net] = 1;
    markReached(this.#readers, [net], this.#clocked);
  }

  /** Returns the names of those that were taken for want of anything better. */
  run(): string[] {
    const { registers, latches } = this.#circuit;
    const byRegister = this.#directlyReached(this.#clockPins);
    const byLatch = this.#directlyReached(latches.enable);
    for (const { name, net } of this.#bits) {
      const besideLatch = this.#clockPins.length === 0 || this.#inFront[net] === 1;
      const enablesLatch = byLatch[net] === 1 && besideLatch && isClockName(name);
      if (byRegister[net] === 1 || enablesLatch) this.accept(net);
    }
    const derived = new Uint8Array(this.#circuit.netCount);
    this.#acceptBefore(derived, ({ name }) => isClockName(name));
    markReached(this.#readers, registers.output, derived);
    this.#acceptBefore(derived, ({ net }) => byLatch[net] === 1);
    const last = this.#acceptBefore(derived, () => true);
    return last.length > 1 ? last : [];
  }

  /** Takes inputs in front of the clock pins that are neither clocked yet nor in `derived`. */
  #acceptBefore(derived: Uint8Array, suits: (bit: InputBit) => boolean): string[] {
    const isOpen = (pin: number) => this.#clocked[pin] === 0 && derived[pin] === 0;
    const cone = coneOf(this.#circuit, this.#clockPins.filter(isOpen));
    const taken = this.#bits.filter((bit) => cone[bit.net] === 1 && suits(bit));
    for (const { net } of taken) this.accept(net);
    return taken.map((bit) => bit.name);
  }

  #directlyReached(pins: Uint32Array): Uint8Array {
    const reached = new Uint8Array(this.#circuit.netCount);
    for (const pin of pins) {
      const source = pin === NO_NET ? NOT_DIRECT : this.#direct[pin]!;
      if (source !== NOT_DIRECT) reached[source >>> 1] = 1;
    }
    return reached;
  }
}

/** Marks the given nets and all that they reach through gates. */
function markReached({ start, reader }: Readers, nets: ArrayLike<number>, mark: Uint8Array): void {
  const pending: number[] = [];
  const visit = (net: number) => {
    if (mark[net]) return;
    mark[net] = 1;
    pending.push(net);
  };
  for (let i = 0; i < nets.length; i++) visit(nets[i]!);
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    for (let i = start[net]!; i < start[net + 1]!; i++) visit(reader[i]!);
  }
}

/** Marks the given nets and all that they depend on through gates. */
function coneOf(circuit: Circuit, nets: Uint32Array): Uint8Array {
  const inCone = new Uint8Array(circuit.netCount);
  const pending: number[] = [];
  const visit = (net: number) => {
    if (inCone[net]) return;
    inCone[net] = 1;
    if (isGate(circuit.kind[net]!)) pending.push(net);
  };
  nets.forEach(visit);
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const end = circuit.faninStart[net + 1]!;
    for (let i = circuit.faninStart[net]!; i < end; i++) visit(circuit.fanin[i]!);
  }
  return inCone;
}
