import type { Source, Span } from '../diagnostics/source.js';
import type { Circuit, Latches, Port, Registers } from './circuit.js';
import { Edge, Priority } from './circuit.js';
import { GateKind, gateInfo } from './gates.js';
import { GrowableUint8, GrowableUint32 } from './growable.js';
import { HierarchyBuilder } from './hierarchy.js';
import { type NetId, NO_NET } from './ids.js';
import { X } from './values.js';

/** What `CircuitBuilder.register` takes; see `Registers` for the meaning of the fields. */
export interface RegisterPins {
  readonly output: NetId;
  readonly clock: NetId;
  readonly data: NetId;
  readonly edge?: number;
  readonly set?: NetId;
  readonly reset?: NetId;
  readonly priority?: number;
  readonly initial?: number;
}

/** What `CircuitBuilder.latch` takes; see `Latches` for the meaning of the fields. */
export interface LatchPins {
  readonly output: NetId;
  readonly enable?: NetId;
  readonly data?: NetId;
  readonly set?: NetId;
  readonly reset?: NetId;
  readonly priority?: number;
  readonly initial?: number;
}

/** A driver beyond the first of a net; readers turn these into messages or a resolved bus. */
export interface ExtraDriver {
  readonly net: NetId;
  readonly sourceIndex: number;
  readonly offset: number;
}

const UNDRIVEN = 255;

/**
 * The only maker of a `Circuit`. Nets may be used before they are driven.
 *
 * `at` names the place in a source that the nets driven after it come from.
 */
export class CircuitBuilder {
  readonly hierarchy = new HierarchyBuilder();
  readonly extraDrivers: ExtraDriver[] = [];
  readonly #kind = new GrowableUint8(1024);
  readonly #driverStart = new GrowableUint32(1024);
  readonly #driverCount = new GrowableUint32(1024);
  readonly #fanin = new GrowableUint32(1024);
  readonly #originSource = new GrowableUint32(1024);
  readonly #originOffset = new GrowableUint32(1024);
  readonly #inputs: Port[] = [];
  readonly #outputs: Port[] = [];
  readonly #registers = new PinTable();
  readonly #latches = new PinTable();
  readonly #sources: Source[] = [];
  #sourceIndex = 0;
  #offset = 0;

  /** Registers a source; returns its index for `at`. */
  addSource(source: Source): number {
    return this.#sources.push(source) - 1;
  }

  /** Sets the origin of what is built next. */
  at(sourceIndex: number, offset: number): void {
    this.#sourceIndex = sourceIndex;
    this.#offset = offset;
  }

  get netCount(): number {
    return this.#kind.length;
  }

  /** A new net without driver. */
  net(): NetId {
    this.#kind.push(UNDRIVEN);
    this.#driverStart.push(0);
    this.#driverCount.push(0);
    this.#originSource.push(this.#sourceIndex);
    this.#originOffset.push(this.#offset);
    return (this.#kind.length - 1) as NetId;
  }

  /** Whether a net has got its driver. */
  isDriven(net: NetId): boolean {
    return this.#kind.get(net) !== UNDRIVEN;
  }

  /** The `GateKind` that drives a net so far, or -1. */
  kindOf(net: NetId): number {
    const kind = this.#kind.get(net);
    return kind === UNDRIVEN ? -1 : kind;
  }

  /**
   * Drives a net by a gate or a constant. A second driver is put on record in `extraDrivers` and
   * otherwise ignored. Throws RangeError for a wrong number of fan-in nets.
   */
  drive(net: NetId, kind: GateKind, fanin: readonly NetId[]): void {
    const { minFanin, maxFanin, name } = gateInfo(kind);
    if (fanin.length < minFanin || fanin.length > maxFanin) {
      throw new RangeError(`${name} takes ${minFanin} to ${maxFanin} inputs, got ${fanin.length}`);
    }
    if (!this.#claim(net, kind)) return;
    this.#driverStart.set(net, this.#fanin.length);
    this.#driverCount.set(net, fanin.length);
    for (const source of fanin) this.#fanin.push(source);
  }

  /** A new net driven by a gate or a constant. */
  gate(kind: GateKind, fanin: readonly NetId[]): NetId {
    const net = this.net();
    this.drive(net, kind, fanin);
    return net;
  }

  /** Adds an input port; its nets are driven by it. `nets[0]` is the rightmost bit. */
  input(name: string, nets: readonly NetId[], range?: { msb: number; lsb: number }): void {
    for (const net of nets) this.#claim(net, GateKind.Input);
    this.#inputs.push(port(name, nets, range));
  }

  /** Adds an output port. */
  output(name: string, nets: readonly NetId[], range?: { msb: number; lsb: number }): void {
    this.#outputs.push(port(name, nets, range));
  }

  /** Adds a register that drives `pins.output`. Edge is rising unless given. */
  register(pins: RegisterPins): void {
    if (!this.#claim(pins.output, GateKind.Register)) return;
    this.#registers.add(pins, pins.clock, pins.edge ?? Edge.Rising);
  }

  /** Adds a latch that drives `pins.output`. */
  latch(pins: LatchPins): void {
    if (!this.#claim(pins.output, GateKind.Latch)) return;
    this.#latches.add(pins, pins.enable ?? NO_NET, Edge.Rising);
  }

  /** Nets that have no driver; `finish` makes them constant x. */
  undrivenNets(): NetId[] {
    const nets: NetId[] = [];
    for (let net = 0; net < this.#kind.length; net++) {
      if (this.#kind.get(net) === UNDRIVEN) nets.push(net as NetId);
    }
    return nets;
  }

  /** Where a net's driver (or, before it has one, its declaration) stands. */
  originOf(net: NetId): Span | undefined {
    const source = this.#sources[this.#originSource.get(net)];
    const start = this.#originOffset.get(net);
    return source && { source, start, end: start };
  }

  /** Publishes the circuit. The builder must not be used afterwards. */
  finish(name: string): Circuit {
    const netCount = this.#kind.length;
    const kind = this.#kind.take();
    for (let net = 0; net < netCount; net++) {
      if (kind[net] === UNDRIVEN) kind[net] = GateKind.Unknown;
    }
    return {
      name,
      netCount,
      kind,
      ...this.#sortedFanin(netCount),
      inputs: this.#inputs,
      outputs: this.#outputs,
      registers: this.#registers.registers(),
      latches: this.#latches.latches(),
      hierarchy: this.hierarchy.finish(),
      sources: this.#sources,
      originSource: Uint16Array.from(this.#originSource.take()),
      originOffset: this.#originOffset.take(),
    };
  }

  #claim(net: NetId, kind: GateKind): boolean {
    if (this.#kind.get(net) !== UNDRIVEN) {
      this.extraDrivers.push({ net, sourceIndex: this.#sourceIndex, offset: this.#offset });
      return false;
    }
    this.#kind.set(net, kind);
    this.#originSource.set(net, this.#sourceIndex);
    this.#originOffset.set(net, this.#offset);
    return true;
  }

  // Drivers come in any order; the published list is in net order.
  #sortedFanin(netCount: number): { faninStart: Uint32Array; fanin: Uint32Array } {
    const faninStart = new Uint32Array(netCount + 1);
    const fanin = new Uint32Array(this.#fanin.length);
    let end = 0;
    for (let net = 0; net < netCount; net++) {
      faninStart[net] = end;
      const start = this.#driverStart.get(net);
      const count = this.#driverCount.get(net);
      for (let i = 0; i < count; i++) fanin[end++] = this.#fanin.get(start + i);
    }
    faninStart[netCount] = end;
    return { faninStart, fanin };
  }
}

function port(name: string, nets: readonly NetId[], range?: { msb: number; lsb: number }): Port {
  const isVector = range !== undefined;
  return {
    name,
    msb: range?.msb ?? 0,
    lsb: range?.lsb ?? 0,
    isVector,
    nets: Uint32Array.from(nets),
  };
}

/** The columns that registers and latches share. */
class PinTable {
  readonly #output = new GrowableUint32();
  readonly #control = new GrowableUint32();
  readonly #edge = new GrowableUint8();
  readonly #data = new GrowableUint32();
  readonly #set = new GrowableUint32();
  readonly #reset = new GrowableUint32();
  readonly #priority = new GrowableUint8();
  readonly #initial = new GrowableUint8();

  add(pins: LatchPins, control: NetId, edge: number): void {
    this.#output.push(pins.output);
    this.#control.push(control);
    this.#edge.push(edge);
    this.#data.push(pins.data ?? NO_NET);
    this.#set.push(pins.set ?? NO_NET);
    this.#reset.push(pins.reset ?? NO_NET);
    this.#priority.push(pins.priority ?? Priority.ResetWins);
    this.#initial.push(pins.initial ?? X);
  }

  registers(): Registers {
    return { ...this.#common(), clock: this.#control.take(), edge: this.#edge.take() };
  }

  latches(): Latches {
    return { ...this.#common(), enable: this.#control.take() };
  }

  #common() {
    return {
      count: this.#output.length,
      output: this.#output.take(),
      data: this.#data.take(),
      set: this.#set.take(),
      reset: this.#reset.take(),
      priority: this.#priority.take(),
      initial: this.#initial.take(),
    };
  }
}
