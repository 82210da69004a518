import { GrowableUint32 } from '../../../circuit/growable.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import { type Budget, tooLarge } from '../budget.js';
import type { HeldMemory } from '../scope.js';
import type { Origin } from './recording.js';

/** A net of a child that is no port, and the net of the parent that it is one with. */
export interface Import {
  readonly childNet: NetId;
  readonly net: NetId;
}

/** A memory of a child, by its number, and the memory of the parent that is one with it. */
export interface MemoryImport {
  readonly childMemory: number;
  readonly memory: HeldMemory;
}

/** A net of a child. */
interface ReachedNet {
  readonly child: number;
  readonly childNet: NetId;
}

// The record of an instance.
const Field = { Template: 0, Name: 1, Block: 2, Source: 3, Offset: 4, Ports: 5, Size: 6 } as const;

const noImports: readonly Import[] = [];
const noMemories: readonly MemoryImport[] = [];

/**
 * The instances inside a module, as records of numbers: which template, under which name, and the
 * parent's net for each net of the template's boundary (`NO_NET` where unconnected).
 */
export class Children {
  readonly #budget: Budget | undefined;
  readonly #records = new GrowableUint32(2 * Field.Size);
  readonly #ports = new GrowableUint32(8);
  #count = 0;
  // Few modules have any of these.
  #imports: Map<number, Import[]> | undefined;
  #memories: Map<number, MemoryImport[]> | undefined;
  #reached: Map<NetId, ReachedNet> | undefined;

  /** `budget` keeps the list from becoming too long, where that is not sure anyway. */
  constructor(budget?: Budget) {
    this.#budget = budget;
  }

  /** Makes room for so many instances with so many connections in all. */
  reserve(instances: number, connections: number): void {
    this.#records.reserve(instances * Field.Size);
    this.#ports.reserve(connections);
  }

  get count(): number {
    return this.#count;
  }

  /**
   * Adds an instance of a template with nothing connected to its boundary of `width` nets, which
   * stands at an offset of a source. `name` is 0 where it shall make no scope.
   */
  add(
    template: number,
    name: NameId,
    block: number,
    source: number,
    offset: number,
    width: number,
  ): number {
    if (this.#budget?.grow(Field.Size + width) === false) throw tooLarge({ source, offset });
    const records = this.#records;
    records.pushThree(template, name, block);
    records.pushThree(source, offset, this.#ports.length);
    this.#ports.extend(width, NO_NET);
    return this.#count++;
  }

  template(child: number): number {
    return this.#field(child, Field.Template);
  }

  name(child: number): NameId {
    return this.#field(child, Field.Name);
  }

  /** The block of the module that the instance stands in; 0 for the module itself. */
  block(child: number): number {
    return this.#field(child, Field.Block);
  }

  origin(child: number): Origin {
    return { source: this.source(child), offset: this.offset(child) };
  }

  source(child: number): number {
    return this.#field(child, Field.Source);
  }

  offset(child: number): number {
    return this.#field(child, Field.Offset);
  }

  /** The parent's net at a place of the template's boundary. */
  port(child: number, place: number): NetId {
    return netId(this.#ports.get(this.#field(child, Field.Ports) + place));
  }

  setPort(child: number, place: number, net: NetId): void {
    this.#ports.set(this.#field(child, Field.Ports) + place, net);
  }

  #field(child: number, field: number): number {
    return this.#records.get(child * Field.Size + field);
  }

  /** Calls `visit` for each net of the parent that is connected to a child. */
  forEachNet(visit: (net: NetId) => void): void {
    for (let i = 0; i < this.#ports.length; i++) {
      const net = this.#ports.get(i);
      if (net !== NO_NET) visit(netId(net));
    }
    if (this.#imports === undefined) return;
    for (const imports of this.#imports.values()) for (const { net } of imports) visit(net);
  }

  /** Whether any child has imports. */
  get hasImports(): boolean {
    return this.#imports !== undefined;
  }

  /** Nets of the child that hierarchical names make one with nets of the parent. */
  imports(child: number): readonly Import[] {
    return this.#imports?.get(child) ?? noImports;
  }

  /**
   * The parent's net that is one with a net of the child; made by `make` when first asked for.
   * `place` is where the child's net stands in its boundary, or -1.
   */
  import(child: number, childNet: NetId, place: number, make: () => NetId): NetId {
    if (place >= 0) {
      const known = this.port(child, place);
      if (known !== NO_NET) return known;
      const net = make();
      this.setPort(child, place, net);
      this.#noteReached(net, { child, childNet });
      return net;
    }
    const known = this.imports(child).find((each) => each.childNet === childNet);
    if (known !== undefined) return known.net;
    const net = make();
    this.adopt(child, childNet, net);
    this.#noteReached(net, { child, childNet });
    return net;
  }

  #noteReached(net: NetId, inside: ReachedNet): void {
    this.#reached ??= new Map();
    this.#reached.set(net, inside);
  }

  /** Lets a net of the child that is no port be one with a net of the parent. */
  adopt(child: number, childNet: NetId, net: NetId): void {
    this.#imports ??= new Map();
    const imports = this.#imports.get(child);
    if (imports === undefined) this.#imports.set(child, [{ childNet, net }]);
    else imports.push({ childNet, net });
  }

  /** Memories of the child that hierarchical names make one with memories of the parent. */
  memoryImports(child: number): readonly MemoryImport[] {
    return this.#memories?.get(child) ?? noMemories;
  }

  /**
   * The parent's memory that is one with a memory of the child; made by `make` when first asked for.
   */
  importMemory(child: number, childMemory: number, make: () => HeldMemory): HeldMemory {
    const known = this.memoryImports(child).find((each) => each.childMemory === childMemory);
    if (known !== undefined) return known.memory;
    const memory = make();
    this.adoptMemory(child, childMemory, memory);
    return memory;
  }

  /** Lets a memory of the child be one with a memory of the parent. */
  adoptMemory(child: number, childMemory: number, memory: HeldMemory): void {
    this.#memories ??= new Map();
    const imports = this.#memories.get(child);
    if (imports === undefined) this.#memories.set(child, [{ childMemory, memory }]);
    else imports.push({ childMemory, memory });
  }

  /** The net of a child for which a net of the parent was made by a hierarchical name. */
  reached(net: NetId): ReachedNet | undefined {
    return this.#reached?.get(net);
  }
}
