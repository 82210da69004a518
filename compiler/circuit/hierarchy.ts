import { GrowableUint32 } from './growable.js';
import type { NetId } from './ids.js';

/** A named signal of a module: a scalar, or a vector with its declared range. */
export interface Signal {
  readonly name: string;
  /** Declared left and right index; both 0 for a scalar. */
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
  /** Set where it is declared signed, or an integer. */
  readonly isSigned?: boolean;
  /** Place of the signal's rightmost (least significant) bit in the module's list of bits. */
  readonly offset: number;
  readonly width: number;
}

/** A list that may make its entries when they are asked for; every array is one. */
export interface LazyList<T> extends Iterable<T> {
  readonly length: number;
  /** The entry at an index from 0 on; undefined beyond the end. */
  at(index: number): T | undefined;
}

/** Names by number, from which strings are made when asked for. */
export interface NameSource {
  text(id: number): string;
}

/** The names that every instance of one module has. */
export interface ModuleNames {
  readonly name: string;
  readonly signals: LazyList<Signal>;
  /** Sum of the signals' widths. */
  readonly bits: number;
}

/**
 * The tree of instances and the net behind each bit of each named signal.
 *
 * Several names may stand for one net (a port and what is connected to it). Scope 0 is the top.
 */
export interface Hierarchy {
  readonly modules: readonly ModuleNames[];
  /** Instance name of each scope; that of scope 0 is the top module's name. */
  readonly scopeNames: LazyList<string>;
  /** Parent of each scope; 0 for scope 0. */
  readonly scopeParent: Uint32Array;
  /** Index into `modules` for each scope. */
  readonly scopeModule: Uint32Array;
  /** For each scope, where its bits start in `netOf`. */
  readonly scopeStart: Uint32Array;
  /** The net of bit `scopeStart[scope] + signal.offset + bit`. */
  readonly netOf: Uint32Array;
}

const OWN_TEXT = 0xffffffff;

/** Names of scopes, most of them four bytes each: a netlist has a million instances. */
class ScopeNames implements LazyList<string> {
  readonly #source: NameSource | undefined;
  readonly #ids = new GrowableUint32();
  readonly #texts = new Map<number, string>();

  constructor(source: NameSource | undefined) {
    this.#source = source;
  }

  get length(): number {
    return this.#ids.length;
  }

  reserve(names: number): void {
    this.#ids.reserve(names);
  }

  /** Adds a name, as a text or by its number in the source; returns its index. */
  push(name: string | number): number {
    const index = this.#ids.length;
    if (typeof name === 'string') this.#texts.set(index, name);
    this.#ids.push(typeof name === 'string' ? OWN_TEXT : name);
    return index;
  }

  at(index: number): string | undefined {
    if (index < 0 || index >= this.#ids.length) return undefined;
    const id = this.#ids.get(index);
    return id === OWN_TEXT ? this.#texts.get(index) : this.#source?.text(id);
  }

  *[Symbol.iterator](): Iterator<string> {
    for (let index = 0; index < this.length; index++) yield this.at(index)!;
  }
}

/** Collects scopes in any order in which parents come before children. */
export class HierarchyBuilder {
  readonly #modules: ModuleNames[] = [];
  readonly #names: ScopeNames;
  readonly #parent = new GrowableUint32();
  readonly #module = new GrowableUint32();
  readonly #start = new GrowableUint32();
  readonly #netOf = new GrowableUint32();

  /** `source` has the names of the scopes that are given one by number. */
  constructor(source?: NameSource) {
    this.#names = new ScopeNames(source);
  }

  /** Makes room for so many scopes with so many bits of signals in all. */
  reserve(scopes: number, bits: number): void {
    this.#names.reserve(scopes);
    for (const column of [this.#parent, this.#module, this.#start]) column.reserve(scopes);
    this.#netOf.reserve(bits);
  }

  /** Registers the names of a module; returns its index. */
  addModule(names: ModuleNames): number {
    return this.#modules.push(names) - 1;
  }

  /**
   * Adds an instance of a module. `nets` has one net for each bit of the module's signals, in the
   * order of `Signal.offset`; `name` is a text or a number of the source. Returns the scope's index.
   */
  addScope(name: string | number, parent: number, module: number, nets: ArrayLike<number>): number {
    const scope = this.#add(name, parent, module);
    this.#netOf.append(nets, nets.length);
    return scope;
  }

  /** Does what `addScope` does, where the nets of the bits stand at certain places of `nets`. */
  addScopeOf(
    name: string | number,
    parent: number,
    module: number,
    nets: Uint32Array,
    places: Uint32Array,
  ): number {
    const scope = this.#add(name, parent, module);
    this.#netOf.appendFrom(nets, places);
    return scope;
  }

  #add(name: string | number, parent: number, module: number): number {
    this.#parent.push(parent);
    this.#module.push(module);
    this.#start.push(this.#netOf.length);
    return this.#names.push(name);
  }

  /** The dotted path of a scope below the top; empty for the top itself. */
  path(scope: number): string {
    const parts: string[] = [];
    for (let s = scope; s !== 0; s = this.#parent.get(s)) parts.push(this.#names.at(s)!);
    return parts.reverse().join('.');
  }

  finish(): Hierarchy {
    return {
      modules: this.#modules,
      scopeNames: this.#names,
      scopeParent: this.#parent.take(),
      scopeModule: this.#module.take(),
      scopeStart: this.#start.take(),
      netOf: this.#netOf.take(),
    };
  }
}

/** The dotted path of a scope below the top, as IEEE 1364 writes it; empty for the top itself. */
export function scopePath(hierarchy: Hierarchy, scope: number): string {
  const parts: string[] = [];
  for (let s = scope; s !== 0; s = hierarchy.scopeParent[s]!)
    parts.push(hierarchy.scopeNames.at(s)!);
  return parts.reverse().join('.');
}

/** The declared index of a bit counted from the right: `[7:4]` has bit 0 at index 4. */
export function declaredIndex(signal: Signal, bit: number): number {
  return signal.lsb <= signal.msb ? signal.lsb + bit : signal.lsb - bit;
}

/** `[3]` for a bit of a vector counted from the right, nothing for a scalar. */
export const indexText = (signal: Signal, bit: number): string =>
  signal.isVector ? `[${declaredIndex(signal, bit)}]` : '';

/** `a.b.q` or `a.b.q[3]` for a bit of a signal. */
export function bitName(hierarchy: Hierarchy, scope: number, signal: Signal, bit: number): string {
  const path = scopePath(hierarchy, scope);
  const base = path === '' ? signal.name : `${path}.${signal.name}`;
  return base + indexText(signal, bit);
}

/**
 * For every net the name nearest to the top: an index into `netOf`, or -1 for a net without name.
 *
 * Takes one pass over all names; use `nameAt` to write one out.
 */
export function primaryNames(hierarchy: Hierarchy, netCount: number): Int32Array {
  const name = new Int32Array(netCount).fill(-1);
  // Scopes are in parent-first order, so the first name met is one of least depth among its
  // ancestors; that is the name a user knows the net by.
  for (let i = hierarchy.netOf.length - 1; i >= 0; i--) name[hierarchy.netOf[i]!] = i;
  return name;
}

/** The full name of the bit at an index into `netOf`. */
export function nameAt(hierarchy: Hierarchy, index: number): string {
  let low = 0;
  let high = hierarchy.scopeStart.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (hierarchy.scopeStart[middle]! <= index) low = middle;
    else high = middle - 1;
  }
  const module = hierarchy.modules[hierarchy.scopeModule[low]!]!;
  const bit = index - hierarchy.scopeStart[low]!;
  const signal = signalAt(module, bit);
  return bitName(hierarchy, low, signal, bit - signal.offset);
}

function signalAt(module: ModuleNames, bit: number): Signal {
  let low = 0;
  let high = module.signals.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (module.signals.at(middle)!.offset <= bit) low = middle;
    else high = middle - 1;
  }
  return module.signals.at(low)!;
}

/** The name of a net, or `net 17` where it has none. */
export function netName(hierarchy: Hierarchy, names: Int32Array, net: NetId | number): string {
  const index = names[net] ?? -1;
  return index < 0 ? `net ${net}` : nameAt(hierarchy, index);
}
