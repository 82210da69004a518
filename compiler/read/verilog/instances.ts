import { GrowableUint32 } from '../../circuit/growable.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';
import type { Expression, RangeSyntax, Strength } from './expressionSyntax.js';

/** The built-in gates and switches of IEEE 1364-2005, clause 7, in a fixed order. */
export const builtinGates = [
  'and',
  'nand',
  'or',
  'nor',
  'xor',
  'xnor',
  'buf',
  'not',
  'bufif0',
  'bufif1',
  'notif0',
  'notif1',
  'nmos',
  'pmos',
  'cmos',
  'rnmos',
  'rpmos',
  'rcmos',
  'tran',
  'rtran',
  'tranif0',
  'tranif1',
  'rtranif0',
  'rtranif1',
  'pullup',
  'pulldown',
] as const;

/** How a connection is stored: by far the most are a whole signal or one bit of one. */
export const ConnectionKind = {
  /** `.a()` or an empty place. */
  Empty: 0,
  /** A plain name: `first` is its NameId. */
  Name: 1,
  /** A name with a literal index: `first` is the NameId, `second` the index. */
  Bit: 2,
  /** Anything else: `first` is an index into `expressions`. */
  Expression: 3,
} as const;

// From so many connections on the table looks how many more may come, at most that many times more.
const LARGE = 1 << 16;
const MOST_SCALE = 64;

// A connection is two numbers: what is connected, and where. What is connected has its kind in the
// upper two bits, and a `Bit` its name and index in a list of their own.
const CONNECTION = 2;
const Field = { Target: 0, Position: 1 } as const;
const KIND = 30;
const MOST = (1 << KIND) - 1;

// The record of an instance; `Start` is its first connection, `Ports` where its ports are listed.
const InstanceField = { Module: 0, Name: 1, Position: 2, Start: 3, Ports: 4, Size: 5 } as const;

// From so many instances on a table keeps in mind for so many modules which ports their last
// instances have listed.
const LONG = 16;
const REMEMBERED = 256;

/** Value of `connectionPort` for a positional connection; no port has the empty name. */
export const POSITIONAL = 0;

/** What only few instances have. */
export interface InstanceExtras {
  /** Array of instances: `u [3:0] (...)`. */
  readonly range: RangeSyntax | undefined;
  /** `#(...)` of a module instance; `name` 0 for positional values. */
  readonly parameters: readonly { readonly name: NameId; readonly value: Expression }[];
  readonly strength: Strength | undefined;
}

/**
 * All instances of a module in columns, twenty bytes for each and eight for each connection.
 *
 * The connections of instance i are `connectionStart(i) … connectionStart(i + 1) - 1`. Instances of
 * a cell that connect the same ports in the same order share a list of them.
 */
export class InstanceTable {
  readonly #instances = new GrowableUint32(8 * InstanceField.Size);
  readonly #connection = new GrowableUint32();
  readonly #bits = new GrowableUint32(16);
  /** Lists of ports, one behind another; nothing in it ever changes. */
  readonly #ports = new GrowableUint32(16);
  /** Where the ports of the instance begun last are listed, and its first connection. */
  #list = 0;
  #start = 0;
  /** Pairs of a module and where the ports of its last instance are listed; of a long table only. */
  #lists: Int32Array | undefined;
  #count = 0;
  #connectionCount = 0;
  #extras: Map<number, InstanceExtras> | undefined;
  readonly expressions: Expression[] = [];
  readonly #fractionRead: () => number;
  /** What had been read before the first instance. */
  #fractionBefore = 0;
  #reserved = LARGE;

  /** `fractionRead` tells how much of the text has been read, of which a large table takes note. */
  constructor(fractionRead: () => number = () => 0) {
    this.#fractionRead = fractionRead;
  }

  get count(): number {
    return this.#count;
  }

  /**
   * Begins an instance; its connections follow by `connect`. `module` is the NameId of a module or
   * primitive, or `-1 - g` for `builtinGates[g]`. `name` is 0 where the instance has none.
   */
  begin(module: number, name: NameId, position: Position, extras?: InstanceExtras): number {
    if (this.#count === 0) this.#fractionBefore = this.#fractionRead();
    if (this.#connectionCount >= this.#reserved) this.#reserve();
    if (extras !== undefined) {
      this.#extras ??= new Map();
      this.#extras.set(this.#count, extras);
    }
    this.#start = this.#connectionCount;
    this.#findList(module);
    this.#instances.pushFour(module >>> 0, name, position, this.#start);
    this.#instances.push(this.#list);
    return this.#count++;
  }

  /** Chooses the list of ports for an instance of a module. */
  #findList(module: number): void {
    if (this.#count === LONG) this.#lists = new Int32Array(2 * REMEMBERED);
    const lists = this.#lists;
    const at = (module & (REMEMBERED - 1)) << 1;
    if (lists !== undefined && lists[at] === module) this.#list = lists[at + 1]!;
    else {
      this.#list = this.#ports.length;
      this.#remember(module);
    }
  }

  /**
   * The port of the next connection of the instance begun last, if it is like others of its module:
   * what `connect` takes, or `POSITIONAL` where nothing is expected.
   */
  get expectedPort(): number {
    const at = this.#list + this.#connectionCount - this.#start;
    return at < this.#ports.length ? this.#ports.get(at) : POSITIONAL;
  }

  /** Adds a connection to the instance begun last. `port` is a NameId or `POSITIONAL`. */
  connect(port: number, kind: number, first: number, second: number, position: Position): void {
    const place = this.#list + this.#connectionCount - this.#start;
    if (place === this.#ports.length) this.#ports.push(port);
    else if (this.#ports.get(place) !== port) this.#listAnew(port);
    let target = first;
    if (kind === ConnectionKind.Bit) {
      target = this.#bits.length;
      this.#bits.push(first);
      this.#bits.push(second);
    }
    this.#connection.pushTwo(target | (kind << KIND), position);
    this.#connectionCount++;
  }

  /** Lets the instance begun last have a list of its own, whose next entry is a port. */
  #listAnew(port: number): void {
    const ports = this.#ports;
    const old = this.#list;
    this.#list = ports.length;
    const end = old + this.#connectionCount - this.#start;
    for (let at = old; at < end; at++) ports.push(ports.get(at));
    ports.push(port);
    const last = this.#count - 1;
    this.#instances.set(last * InstanceField.Size + InstanceField.Ports, this.#list);
    this.#remember(this.module(last));
  }

  #remember(module: number): void {
    if (this.#lists === undefined) return;
    const at = (module & (REMEMBERED - 1)) << 1;
    this.#lists[at] = module;
    this.#lists[at + 1] = this.#list;
  }

  /** Lets other lists use the memory of this table, which becomes empty. */
  release(): void {
    this.#instances.release();
    this.#connection.release();
    this.#bits.release();
    this.#ports.release();
    this.#count = 0;
    this.#connectionCount = 0;
  }

  // With what has been read as a measure of what comes, a large table need not grow step by step.
  #reserve(): void {
    const read = (this.#fractionRead() - this.#fractionBefore) / (1 - this.#fractionBefore);
    const scale = Math.min(MOST_SCALE, 1.05 / Math.max(read, 0.01));
    const instances = Math.ceil(this.count * scale);
    const connections = Math.ceil(this.#connectionCount * scale);
    this.#instances.reserve(instances * InstanceField.Size);
    this.#connection.reserve(CONNECTION * connections);
    this.#bits.reserve(Math.ceil(this.#bits.length * scale));
    // Before the last of them is there, and with it the need for more.
    this.#reserved = Math.max(Math.floor(0.9 * connections), 2 * this.#reserved);
  }

  /** NameId of the module or primitive, or `-1 - g` for a built-in gate. */
  module(instance: number): number {
    return this.#field(instance, InstanceField.Module) | 0;
  }

  name(instance: number): NameId {
    return this.#field(instance, InstanceField.Name);
  }

  /** Where the instance's text starts. */
  position(instance: number): Position {
    return this.#field(instance, InstanceField.Position);
  }

  extras(instance: number): InstanceExtras | undefined {
    return this.#extras?.get(instance);
  }

  connectionStart(instance: number): number {
    return instance < this.count
      ? this.#field(instance, InstanceField.Start)
      : this.#connectionCount;
  }

  /** NameId of the port of a connection that an instance has, or `POSITIONAL`. */
  connectionPort(instance: number, connection: number): number {
    const place = connection - this.#field(instance, InstanceField.Start);
    return this.#ports.get(this.#field(instance, InstanceField.Ports) + place);
  }

  /** A `ConnectionKind`. */
  connectionKind(connection: number): number {
    return this.#target(connection) >>> KIND;
  }

  connectionFirst(connection: number): number {
    const target = this.#target(connection);
    const first = target & MOST;
    return target >>> KIND === ConnectionKind.Bit ? this.#bits.get(first) : first;
  }

  connectionSecond(connection: number): number {
    const target = this.#target(connection);
    return target >>> KIND === ConnectionKind.Bit ? this.#bits.get((target & MOST) + 1) : 0;
  }

  connectionPosition(connection: number): Position {
    return this.#connection.get(connection * CONNECTION + Field.Position);
  }

  #field(instance: number, field: number): number {
    return this.#instances.get(instance * InstanceField.Size + field);
  }

  #target(connection: number): number {
    return this.#connection.get(connection * CONNECTION + Field.Target);
  }
}
