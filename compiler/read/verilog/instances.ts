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

// A connection is three numbers: the port, what it is connected to, and where. What it is connected
// to has its kind in the upper two bits, and a `Bit` its name and index in a list of their own.
const CONNECTION = 3;
const Field = { Port: 0, Target: 1, Position: 2 } as const;
const KIND = 30;
const MOST = (1 << KIND) - 1;

// The record of an instance; `Start` is its first connection.
const InstanceField = { Module: 0, Name: 1, Position: 2, Start: 3, Size: 4 } as const;

/** Value of `connectionPort` for a positional connection. */
export const POSITIONAL = 0xffffffff;

/** What only few instances have. */
export interface InstanceExtras {
  /** Array of instances: `u [3:0] (...)`. */
  readonly range: RangeSyntax | undefined;
  /** `#(...)` of a module instance; `name` 0 for positional values. */
  readonly parameters: readonly { readonly name: NameId; readonly value: Expression }[];
  readonly strength: Strength | undefined;
}

/**
 * All instances of a module in columns, sixteen bytes for each and twelve for each connection.
 *
 * The connections of instance i are `connectionStart(i) … connectionStart(i + 1) - 1`.
 */
export class InstanceTable {
  readonly #instances = new GrowableUint32(8 * InstanceField.Size);
  readonly #connection = new GrowableUint32();
  readonly #bits = new GrowableUint32(16);
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
    return this.#instances.length / InstanceField.Size;
  }

  /**
   * Begins an instance; its connections follow by `connect`. `module` is the NameId of a module or
   * primitive, or `-1 - g` for `builtinGates[g]`. `name` is 0 where the instance has none.
   */
  begin(module: number, name: NameId, position: Position, extras?: InstanceExtras): number {
    const { count } = this;
    if (count === 0) this.#fractionBefore = this.#fractionRead();
    if (this.#connectionCount >= this.#reserved) this.#reserve();
    if (extras !== undefined) {
      this.#extras ??= new Map();
      this.#extras.set(count, extras);
    }
    this.#instances.pushFour(module >>> 0, name, position, this.#connectionCount);
    return count;
  }

  /** Adds a connection to the instance begun last. `port` is a NameId or `POSITIONAL`. */
  connect(port: number, kind: number, first: number, second: number, position: Position): void {
    let target = first;
    if (kind === ConnectionKind.Bit) {
      target = this.#bits.length;
      this.#bits.push(first);
      this.#bits.push(second);
    }
    this.#connection.pushThree(port, target | (kind << KIND), position);
  }

  /** Lets other lists use the memory of this table, which becomes empty. */
  release(): void {
    this.#instances.release();
    this.#connection.release();
    this.#bits.release();
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
    this.#reserved = Math.max(0.9 * connections, 2 * this.#reserved);
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

  /** NameId of the port, or `POSITIONAL`. */
  connectionPort(connection: number): number {
    return this.#connection.get(connection * CONNECTION + Field.Port);
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

  get #connectionCount(): number {
    return this.#connection.length / CONNECTION;
  }

  #target(connection: number): number {
    return this.#connection.get(connection * CONNECTION + Field.Target);
  }
}
