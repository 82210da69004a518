import type { Source, Span } from '../diagnostics/source.js';
import { BusParts, joinedType, NetType } from './busParts.js';
import type { BusCheck, Circuit, Port } from './circuit.js';
import { Edge, type ValueNames } from './circuit.js';
import { GateKind, gateInfo } from './gates.js';
import { GrowableSmall, GrowableUint8, GrowableUint32 } from './growable.js';
import {
  type Hierarchy,
  HierarchyBuilder,
  type NameSource,
  netName,
  primaryNames,
} from './hierarchy.js';
import { type NetId, NO_NET, netId } from './ids.js';
import type { MemoryShape } from './memory.js';
import { MemoryTable, type WritePins } from './memoryTable.js';
import { type LatchPins, PinTable, type RegisterPins } from './pinTable.js';
import type { CellTable } from './tables/cellTable.js';
import { TableColumns } from './tables/tableColumns.js';

export type { LatchPins, RegisterPins } from './pinTable.js';

/** A driver beyond the first of a net; readers turn these into messages or a resolved bus. */
export interface ExtraDriver {
  readonly net: NetId;
  /** A net of its own that it drives in place of `net`. */
  readonly driver: NetId;
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
  readonly hierarchy: HierarchyBuilder;
  readonly extraDrivers: ExtraDriver[] = [];
  readonly #kind: GrowableUint8;
  readonly #driverStart: GrowableUint32;
  readonly #driverCount: GrowableSmall;
  readonly #fanin: GrowableUint32;
  readonly #originSource: GrowableSmall;
  readonly #originOffset: GrowableUint32;
  readonly #inputs: Port[] = [];
  readonly #outputs: Port[] = [];
  readonly #registers = new PinTable();
  readonly #latches = new PinTable();
  readonly #memories = new MemoryTable();
  readonly #tables = new TableColumns();
  readonly #sources: Source[] = [];
  readonly #checks: Omit<BusCheck, 'name'>[] = [];
  readonly #netTypes = new Map<NetId, NetType>();
  readonly #valueNames: ValueNames[] = [];
  /** What drives nets part of the time or weakly; `resolveBuses` makes gates of it. */
  readonly busParts = new BusParts();
  #sourceIndex = 0;
  #offset = 0;

  /**
   * Room for `expectedNets` is made at once; more than that cost some copying. `names` has the
   * names of the scopes that are given one by number.
   */
  constructor(expectedNets = 1024, names?: NameSource) {
    this.hierarchy = new HierarchyBuilder(names);
    this.#kind = new GrowableUint8(expectedNets);
    this.#driverStart = new GrowableUint32(expectedNets);
    this.#driverCount = new GrowableSmall(expectedNets);
    this.#fanin = new GrowableUint32(2 * expectedNets);
    this.#originSource = new GrowableSmall(expectedNets);
    this.#originOffset = new GrowableUint32(expectedNets);
  }

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

  /** The fan-in of the gate that drives a net; empty for any other net. */
  faninOf(net: NetId): NetId[] {
    const start = this.#driverStart.get(net);
    const count = this.#driverCount.get(net);
    return Array.from({ length: count }, (_, i) => netId(this.#fanin.get(start + i)));
  }

  /**
   * Drives a net by a gate or a constant. A second driver of a net drives a new net instead, and
   * is put on record in `extraDrivers`. Returns the net that is driven. Throws RangeError for a
   * wrong number of fan-in nets.
   */
  drive(net: NetId, kind: GateKind, fanin: readonly NetId[]): NetId {
    const { minFanin, maxFanin, name } = gateInfo(kind);
    if (fanin.length < minFanin || fanin.length > maxFanin) {
      throw new RangeError(`${name} takes ${minFanin} to ${maxFanin} inputs, got ${fanin.length}`);
    }
    const driven = this.#claim(net, kind);
    this.#driverStart.set(driven, this.#fanin.length);
    this.#driverCount.set(driven, fanin.length);
    for (const source of fanin) this.#fanin.push(source);
    return driven;
  }

  /** A new net driven by a gate or a constant. */
  gate(kind: GateKind, fanin: readonly NetId[]): NetId {
    const net = this.net();
    this.drive(net, kind, fanin);
    return net;
  }

  /** Adds an input port; its nets are driven by it. `nets[0]` is the rightmost bit. */
  input(name: string, nets: readonly NetId[], range?: { msb: number; lsb: number }): void {
    const driven = nets.map((net) => this.#claim(net, GateKind.Input));
    this.#inputs.push(port(name, driven, range));
  }

  /** Adds an output port. */
  output(name: string, nets: readonly NetId[], range?: { msb: number; lsb: number }): void {
    this.#outputs.push(port(name, nets, range));
  }

  /** Names of the ports so far. */
  portNames(): string[] {
    return [...this.#inputs, ...this.#outputs].map(({ name }) => name);
  }

  /** Adds a register that drives `pins.output`, as `drive` does. Edge is rising unless given. */
  register(pins: RegisterPins): NetId {
    const output = this.#claim(pins.output, GateKind.Register);
    this.#registers.add(pins, output, pins.clock, pins.edge ?? Edge.Rising);
    return output;
  }

  /** Adds a latch that drives `pins.output`, as `drive` does. */
  latch(pins: LatchPins): NetId {
    const output = this.#claim(pins.output, GateKind.Latch);
    this.#latches.add(pins, output, pins.enable ?? NO_NET, Edge.Rising);
    return output;
  }

  /** Gives the registers and latches that drive certain nets other values at power-up. */
  setInitials(values: ReadonlyMap<number, 0 | 1>): void {
    if (values.size === 0) return;
    this.#registers.setInitials(values);
    this.#latches.setInitials(values);
  }

  /** Adds the table of a cell whose gate, register or latch drives `output`. */
  table(output: NetId, inputs: readonly NetId[], table: CellTable): void {
    this.#tables.add(output, inputs, table);
  }

  /** Names values of a signal. */
  nameValues(named: ValueNames): void {
    this.#valueNames.push(named);
  }

  /** Adds a memory without ports; returns its number. */
  memory(shape: MemoryShape): number {
    return this.#memories.add(shape);
  }

  /** Gives a memory other contents at power-up, in the form of `MemoryShape.initial`. */
  setContents(memory: number, initial: Uint8Array | undefined): void {
    this.#memories.setContents(memory, initial);
  }

  /**
   * Adds a port of a memory that reads the word at `address` into `data`, `NO_NET` for a bit that
   * nobody reads. Throws RangeError for a wrong number of nets.
   */
  readPort(memory: number, address: readonly NetId[], data: readonly NetId[]): void {
    const driven = data.map((net) =>
      net === NO_NET ? NO_NET : this.drive(net, GateKind.MemoryRead, address),
    );
    this.#memories.read(memory, address, driven);
  }

  /** Adds a port that reads the word at `address`; returns its data nets, which are new. */
  readMemory(memory: number, address: readonly NetId[]): NetId[] {
    const data = Array.from({ length: this.#memories.widthOf(memory) }, () => this.net());
    this.readPort(memory, address, data);
    return data;
  }

  /** Adds a port that writes after those before. Edge is rising unless given. */
  writeMemory(memory: number, pins: WritePins): void {
    this.#memories.write(memory, pins, pins.edge ?? Edge.Rising);
  }

  /**
   * Adds something that drives a net part of the time or weakly; `traits` is what `packTraits`
   * makes, `control` is `NO_NET` for always. It counts as a driver of the net only once
   * `resolveBuses` has made gates of it.
   */
  busPart(net: NetId, data: NetId, control: NetId, traits: number): void {
    const { sourceIndex, offset } = this.#place();
    this.busParts.add({ net, data, control, sourceIndex, offset }, traits);
  }

  /** Gives a net a type; called for the names of a net from the outermost instance inwards. */
  setNetType(net: NetId, type: NetType): void {
    this.#netTypes.set(net, joinedType(this.netType(net), type));
  }

  netType(net: NetId): NetType {
    return this.#netTypes.get(net) ?? NetType.Plain;
  }

  /** The nets that have a type. */
  typedNets(): Iterable<NetId> {
    return this.#netTypes.keys();
  }

  /** Adds a net to `Circuit.checks`, with the place of what is built as that of the bus. */
  check(kind: BusCheck['kind'], net: NetId, when: NetId): void {
    this.#checks.push({ kind, net, when, ...this.#place() });
  }

  /** Moves the drivers of nets to new nets, which it returns; inputs cannot be moved. */
  detach(nets: readonly NetId[]): NetId[] {
    const moved = new Map<number, NetId>();
    for (const net of nets) {
      const to = this.net();
      moved.set(net, to);
      this.#kind.set(to, this.#kind.get(net));
      for (const column of [
        this.#driverStart,
        this.#driverCount,
        this.#originSource,
        this.#originOffset,
      ]) {
        column.set(to, column.get(net));
      }
      this.#kind.set(net, UNDRIVEN);
      this.#driverStart.set(net, 0);
      this.#driverCount.set(net, 0);
    }
    this.#registers.moveOutputs(moved);
    this.#latches.moveOutputs(moved);
    this.#memories.moveOutputs(moved);
    this.#tables.moveOutputs(moved);
    return [...moved.values()];
  }

  /** A 1 for each net that a gate, a register, a latch or an output port reads so far. */
  readNets(): Uint8Array {
    const isRead = new Uint8Array(this.#kind.length);
    for (let i = 0; i < this.#fanin.length; i++) isRead[this.#fanin.get(i)] = 1;
    for (const { nets } of this.#outputs) for (const net of nets) isRead[net] = 1;
    this.#registers.markReads(isRead);
    this.#latches.markReads(isRead);
    this.#memories.markReads(isRead);
    this.#tables.markReads(isRead);
    return isRead;
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

  /** The place that `originOf` tells, as index of a source and byte offset in it. */
  placeOf(net: NetId): { readonly sourceIndex: number; readonly offset: number } {
    return { sourceIndex: this.#originSource.get(net), offset: this.#originOffset.get(net) };
  }

  /** Publishes the circuit. The builder must not be used afterwards. */
  finish(name: string): Circuit {
    const netCount = this.#kind.length;
    const kind = this.#kind.take();
    for (let net = 0; net < netCount; net++) {
      if (kind[net] === UNDRIVEN) kind[net] = GateKind.Unknown;
    }
    const hierarchy = this.hierarchy.finish();
    return {
      name,
      netCount,
      kind,
      ...this.#sortedFanin(netCount),
      inputs: this.#inputs,
      outputs: this.#outputs,
      registers: this.#registers.registers(),
      latches: this.#latches.latches(),
      memories: this.#memories.take(),
      tables: this.#tables.take(),
      hierarchy,
      ...(this.#valueNames.length > 0 && { valueNames: this.#valueNames }),
      checks: this.#namedChecks(hierarchy, netCount),
      sources: this.#sources,
      originSource: this.#originSource.toUint16(),
      originOffset: this.#originOffset.take(),
    };
  }

  // Returns the net that the driver is to drive: a new one where the net has a driver already.
  #claim(net: NetId, kind: GateKind): NetId {
    const isFirst = this.#kind.get(net) === UNDRIVEN;
    const driven = isFirst ? net : this.net();
    if (!isFirst) this.extraDrivers.push({ net, driver: driven, ...this.#place() });
    this.#kind.set(driven, kind);
    this.#originSource.set(driven, this.#sourceIndex);
    this.#originOffset.set(driven, this.#offset);
    return driven;
  }

  #place() {
    return { sourceIndex: this.#sourceIndex, offset: this.#offset };
  }

  #namedChecks(hierarchy: Hierarchy, netCount: number): BusCheck[] {
    if (this.#checks.length === 0) return [];
    const names = primaryNames(hierarchy, netCount);
    return this.#checks.map((check) => ({ ...check, name: netName(hierarchy, names, check.net) }));
  }

  // Drivers come in any order; the published list is in net order.
  #sortedFanin(netCount: number): { faninStart: Uint32Array; fanin: Uint32Array } {
    this.#driverStart.push(0);
    // In place: the start of a net is read before it is written.
    const faninStart = this.#driverStart.take();
    const sorted = new GrowableUint32(this.#fanin.length);
    for (let net = 0; net < netCount; net++) {
      const start = faninStart[net]!;
      const end = start + this.#driverCount.get(net);
      faninStart[net] = sorted.length;
      for (let i = start; i < end; i++) sorted.push(this.#fanin.get(i));
    }
    faninStart[netCount] = sorted.length;
    return { faninStart, fanin: sorted.take() };
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
