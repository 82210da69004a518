import type { LatchPins, RegisterPins } from '../../../circuit/builder.js';
import { type PartTraits, packTraits } from '../../../circuit/busParts.js';
import { Edge, Priority } from '../../../circuit/circuit.js';
import { GateKind } from '../../../circuit/gates.js';
import { GrowableUint8, GrowableUint32 } from '../../../circuit/growable.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import { depthOf, type MemoryIndex, type WordForm } from '../../../circuit/memory.js';
import { pinNets, type WritePins } from '../../../circuit/memoryTable.js';
import type { CellTable } from '../../../circuit/tables/cellTable.js';
import { X } from '../../../circuit/values.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import { type Budget, tooLarge } from '../budget.js';
import { FarContents, type InitialContents } from '../initialContents.js';
import type { GateSink, HeldMemory } from '../scope.js';
import { Unions } from './unions.js';

/** A place as `GateSink.at` takes it: index of a source, byte offset in it. */
export interface Origin {
  readonly source: number;
  readonly offset: number;
}

/**
 * The fan-in list of a register or latch: these five numbers, with `NO_NET` for an absent net.
 * `Control` is the clock or the enable, `Attributes` what `packAttributes` makes.
 */
export const Pin = { Control: 0, Data: 1, Set: 2, Reset: 3, Attributes: 4 } as const;

/** Kind of a driver that was taken out of a recording. */
export const DROPPED = 255;

/**
 * Kind of a driver that is a part of a bus; only that of a dropped one is greater. Its fan-in list
 * has these three numbers: `NO_NET` as `Control` for always, as `Traits` what `packTraits` makes.
 */
export const BUS_PART = 254;
export const BusPin = { Data: 0, Control: 1, Traits: 2 } as const;

/** The table of a cell whose gate, register or latch drives `output`. */
export interface RecordedTable {
  readonly output: NetId;
  readonly inputs: readonly NetId[];
  /** The inputs that count as read. */
  readonly reads: readonly NetId[];
  readonly table: CellTable;
}

/** A memory of a module, or of another one that it names, with the ports of this module. */
export interface RecordedMemory {
  readonly name: string;
  /** Index of the block of its module that it is declared in. */
  readonly block: number;
  readonly width: number;
  readonly word: WordForm;
  readonly indices: readonly MemoryIndex[];
  /** What this module says of its contents at power-up. */
  readonly contents: InitialContents | FarContents;
  /** Where it is declared. */
  readonly position: Position;
  readonly origin: Origin;
  /** Ports by which it is read, each with the driver of the lowest bit; the others follow. */
  readonly reads: { readonly address: readonly NetId[]; readonly firstDriver: number }[];
  readonly writes: WritePins[];
  /** As in `HeldMemory`. */
  readonly isWritten?: boolean;
}

// `FirstDriver` is the number of a driver + 1, or 0.
const NetField = { Source: 0, Offset: 1, FirstDriver: 2, Size: 3 } as const;
const DriverField = { Output: 0, Start: 1, Source: 2, Offset: 3, Size: 4 } as const;

// What a net and a driver cost the budget: their record, and `#declared` or `#kind` beside it.
const NUMBERS_OF_NET = NetField.Size + 1;
const NUMBERS_OF_DRIVER = DriverField.Size + 1;

const noNets: readonly NetId[] = [];

const packAttributes = (edge: number, priority: number, initial: number): number =>
  edge | (priority << 1) | (initial << 3);

/** Edge, priority and power-up value out of the last number of a state element's list. */
export const unpackAttributes = (packed: number) => ({
  edge: packed & 1,
  priority: (packed >> 1) & 3,
  initial: packed >> 3,
});

/**
 * The logic of one module, as columns of nets and drivers in the order they were recorded.
 *
 * Net ids are those of this module. A net may have any number of drivers here; what that means is
 * decided when the module is complete.
 */
export class Recording implements GateSink {
  readonly #unions = new Unions();
  // A record of each net and of each driver: a design may have thousands of small modules, for
  // which a column for each field would cost far more than what it holds.
  readonly #nets = new GrowableUint32(8 * NetField.Size);
  // 1 for a net that a declaration has named.
  readonly #declared = new GrowableUint8(8);
  readonly #drivers = new GrowableUint32(8 * DriverField.Size);
  readonly #kind = new GrowableUint8(8);
  readonly #fanin = new GrowableUint32(16);
  /** By their kind. */
  readonly #constants: NetId[] = [];
  /** Of a cell with one output or a few; empty for other modules. */
  readonly tables: RecordedTable[] = [];
  readonly memories: RecordedMemory[] = [];
  #words: Map<string, readonly NetId[]> | undefined;
  readonly #budget: Budget | undefined;
  #netCount = 0;
  #driverCount = 0;
  #undeclared = 0;
  #atSource = 0;
  #atOffset = 0;

  /** `budget` keeps it from becoming too large, where that is not sure anyway. */
  constructor(budget?: Budget) {
    this.#budget = budget;
  }

  at(sourceIndex: number, offset: number): void {
    this.#atSource = sourceIndex;
    this.#atOffset = offset;
  }

  /** Makes room for so many nets. */
  reserve(nets: number): void {
    this.#nets.reserve(nets * NetField.Size);
    this.#declared.reserve(nets);
  }

  get netCount(): number {
    return this.#netCount;
  }

  net(): NetId {
    this.#undeclared++;
    return this.#add(0);
  }

  #add(declared: number): NetId {
    this.#grow(NUMBERS_OF_NET);
    this.#declared.push(declared);
    this.#nets.pushThree(this.#atSource, this.#atOffset, 0);
    return netId(this.#netCount++);
  }

  /** New nets with consecutive ids, for something declared; returns the first. */
  declare(count: number): NetId {
    const first = netId(this.netCount);
    for (let i = 0; i < count; i++) this.#add(1);
    return first;
  }

  /** Whether there is a net that no declaration has named. */
  get hasUndeclared(): boolean {
    return this.#undeclared > 0;
  }

  /** Whether a declaration has named a net. */
  isDeclared(net: number): boolean {
    return this.#declared.get(net) === 1;
  }

  /** Makes two nets one. */
  join(a: NetId, b: NetId): void {
    const driver = this.#firstDriver(this.find(a)) || this.#firstDriver(this.find(b));
    this.#unions.join(a, b);
    this.#setFirstDriver(this.find(a), driver);
  }

  /** The oldest of the nets that a net is one with. */
  find(net: NetId): NetId {
    return netId(this.#unions.find(net));
  }

  /** Whether any nets were joined. */
  get hasJoins(): boolean {
    return !this.#unions.isEmpty;
  }

  isDriven(net: NetId): boolean {
    return this.#firstDriver(this.find(net)) !== 0;
  }

  kindOf(net: NetId): number {
    const driver = this.#firstDriver(this.find(net));
    if (driver === 0) return -1;
    const kind = this.#kind.get(driver - 1);
    return kind <= GateKind.Unknown && this.isDeclared(net) ? -1 : kind;
  }

  drive(net: NetId, kind: GateKind, fanin: readonly NetId[]): void {
    this.#begin(net, kind);
    this.#grow(fanin.length);
    for (const source of fanin) this.#fanin.push(source);
  }

  gate(kind: GateKind, fanin: readonly NetId[]): NetId {
    if (kind <= GateKind.Unknown) return this.constant(kind);
    const net = this.net();
    this.drive(net, kind, fanin);
    return net;
  }

  /** The module's one net of a constant. */
  constant(kind: GateKind): NetId {
    const known = this.#constants[kind];
    if (known !== undefined) return known;
    const net = this.net();
    this.#constants[kind] = net;
    this.drive(net, kind, []);
    return net;
  }

  register(pins: RegisterPins): void {
    this.#begin(pins.output, GateKind.Register);
    this.#pins(pins, pins.clock, pins.edge ?? Edge.Rising);
  }

  latch(pins: LatchPins): void {
    this.#begin(pins.output, GateKind.Latch);
    this.#pins(pins, pins.enable ?? NO_NET, Edge.Rising);
  }

  /** Adds a memory without ports; returns its number. */
  memory(memory: Omit<RecordedMemory, 'origin' | 'reads' | 'writes'>): number {
    const origin = { source: this.#atSource, offset: this.#atOffset };
    return this.memories.push({ ...memory, origin, reads: [], writes: [] }) - 1;
  }

  /** Adds what stands for a memory of another module. */
  farMemory(memory: RecordedMemory): HeldMemory {
    const { width, indices, position } = memory;
    const contents = new FarContents(width, depthOf(indices), memory.contents);
    const isWritten = memory.writes.length > 0 || memory.isWritten === true;
    const own = { ...memory, contents, reads: [], writes: [], isWritten };
    const number = this.memories.push(own) - 1;
    return { number, indices, contents, position, isFar: true, isWritten };
  }

  readMemory(memory: number, address: readonly NetId[]): readonly NetId[] {
    const key = `${memory} ${address.join()}`;
    const known = this.#words?.get(key);
    if (known !== undefined) return known;
    const { width, reads } = this.memories[memory]!;
    reads.push({ address: [...address], firstDriver: this.driverCount });
    const word = Array.from({ length: width }, () => this.net());
    for (const net of word) this.drive(net, GateKind.MemoryRead, address);
    this.#words ??= new Map();
    this.#words.set(key, word);
    return word;
  }

  writeMemory(memory: number, pins: WritePins): void {
    this.memories[memory]!.writes.push(pins);
  }

  /** Adds what drives a net part of the time or weakly; `control` is `NO_NET` for always. */
  busPart(net: NetId, data: NetId, control: NetId, traits: PartTraits): void {
    this.#begin(net, BUS_PART);
    this.#fanin.pushThree(data, control, packTraits(traits));
  }

  /** The nets that write ports read; some may stand there several times. */
  writtenNets(): Iterable<NetId> {
    return this.memories.length === 0 ? noNets : this.#writtenNets();
  }

  *#writtenNets(): Iterable<NetId> {
    for (const { writes } of this.memories) for (const pins of writes) yield* pinNets(pins);
  }

  // ---- What was recorded, for completing and stamping the module ----

  get driverCount(): number {
    return this.#driverCount;
  }

  driverOutput(driver: number): NetId {
    return netId(this.#drivers.get(driver * DriverField.Size + DriverField.Output));
  }

  /** Takes a driver out; its kind is `DROPPED` from now on. */
  drop(driver: number): void {
    this.#kind.set(driver, DROPPED);
  }

  /** Makes a driver a constant, whatever it read before. */
  makeConstant(driver: number, kind: GateKind): void {
    this.#kind.set(driver, kind);
  }

  /** Lets a driver drive another net. */
  redirect(driver: number, net: NetId): void {
    this.#drivers.set(driver * DriverField.Size + DriverField.Output, net);
  }

  /** A `GateKind`, or `DROPPED`. */
  driverKind(driver: number): number {
    return this.#kind.get(driver);
  }

  faninStart(driver: number): number {
    return this.#drivers.get(driver * DriverField.Size + DriverField.Start);
  }

  /**
   * End of a driver's stretch of the fan-in list, the list of `Pin` numbers included. That of a
   * constant has no meaning.
   */
  faninEnd(driver: number): number {
    return driver + 1 < this.#driverCount ? this.faninStart(driver + 1) : this.#fanin.length;
  }

  faninAt(index: number): NetId {
    return netId(this.#fanin.get(index));
  }

  netSource(net: number): number {
    return this.#nets.get(net * NetField.Size + NetField.Source);
  }

  netOffset(net: number): number {
    return this.#nets.get(net * NetField.Size + NetField.Offset);
  }

  netOrigin(net: number): Origin {
    return { source: this.netSource(net), offset: this.netOffset(net) };
  }

  driverSource(driver: number): number {
    return this.#drivers.get(driver * DriverField.Size + DriverField.Source);
  }

  driverOffset(driver: number): number {
    return this.#drivers.get(driver * DriverField.Size + DriverField.Offset);
  }

  driverOrigin(driver: number): Origin {
    return { source: this.driverSource(driver), offset: this.driverOffset(driver) };
  }

  #begin(net: NetId, kind: number): void {
    this.#grow(NUMBERS_OF_DRIVER);
    const root = this.find(net);
    const count = ++this.#driverCount;
    if (this.#firstDriver(root) === 0) this.#setFirstDriver(root, count);
    this.#kind.push(kind);
    this.#drivers.pushFour(net, this.#fanin.length, this.#atSource, this.#atOffset);
  }

  #firstDriver(net: number): number {
    return this.#nets.get(net * NetField.Size + NetField.FirstDriver);
  }

  #setFirstDriver(net: number, driver: number): void {
    this.#nets.set(net * NetField.Size + NetField.FirstDriver, driver);
  }

  #grow(numbers: number): void {
    if (this.#budget?.grow(numbers) !== false) return;
    throw tooLarge({ source: this.#atSource, offset: this.#atOffset });
  }

  #pins(pins: LatchPins, control: NetId, edge: number): void {
    this.#fanin.pushFour(control, pins.data ?? NO_NET, pins.set ?? NO_NET, pins.reset ?? NO_NET);
    const priority = pins.priority ?? Priority.ResetWins;
    this.#fanin.push(packAttributes(edge, priority, pins.initial ?? X));
  }
}
