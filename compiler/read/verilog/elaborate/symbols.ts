import { NetType } from '../../../circuit/busParts.js';
import { GrowableUint32 } from '../../../circuit/growable.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type { PlainNames } from '../plainNames.js';
import { NameIndex } from './nameIndex.js';
import { WireRuns } from './wireRuns.js';

/** What a name of a module is; the comment tells what the symbol's `value` then holds. */
export const SymbolKind = {
  /** First net; the others follow it. */
  Signal: 0,
  /** Index into the scope's `memories`. */
  Memory: 1,
  /** Index into the scope's `constants`, `NO_VALUE` or `REAL_VALUE`. */
  Parameter: 2,
  /** Index into the scope's `routines`. */
  Routine: 3,
  /** Index into the module's `blocks`. */
  Block: 4,
  /** Index into the module's placed instances. */
  Instance: 5,
  /** Nothing: the loop's blocks hold the value as a parameter. */
  Genvar: 6,
  /** An `OtherName`: a name that is known but has no meaning here. */
  Other: 7,
} as const;

/** Value of a parameter that has none because of an error. */
export const NO_VALUE = 0xffffffff;

/** Value of a real parameter. */
export const REAL_VALUE = 0xfffffffe;

/** What a name without a meaning was declared as. */
export const OtherName = { Faulty: 0, Real: 1, Event: 2, Block: 3 } as const;

/** Bits of a symbol's flags. */
export const Flag = {
  Vector: 1,
  Signed: 2,
  Variable: 4,
  Input: 8,
  Output: 16,
  /** Declared with a type word, as against a bare port declaration. */
  Typed: 32,
  Implicit: 64,
  Inout: 8 | 16,
} as const;

/** How the drivers of a net are resolved, and what it is without one: a `NetType` or a supply. */
export const NetClass = { ...NetType, Supply0: 8, Supply1: 9 } as const;

/** What `SymbolTable.add` takes. */
export interface NewSymbol {
  readonly name: NameId;
  readonly kind: number;
  readonly value: number;
  readonly start: Position;
  readonly end: Position;
  readonly flags?: number;
  readonly netClass?: number;
  readonly msb?: number;
  readonly lsb?: number;
}

// One record of numbers per symbol: a generate loop makes thousands of small tables, where a
// column for each field would cost far more than what it holds.
const Field = { Name: 0, Traits: 1, Value: 2, Start: 3 } as const;
const RECORD = 4;

/** Names in a table that has no index. */
const SHORT = 8;

// `Traits` holds the kind in its lowest bits and whether there is a `Rarity`, then the flags, the
// net class and the length of the text; of a greater length, the `Rarity` tells the end.
const KIND = 0x7f;
const RARE = 0x80;
const FLAGS = 8;
const CLASS = 16;
const LENGTH = 20;
const BYTE = 0xff;
const NIBBLE = 0xf;
const MOST_LENGTH = (1 << (32 - LENGTH)) - 1;

/** What the records have no room for: by far the most symbols of a netlist are short scalars. */
interface Rarity {
  readonly msb: number;
  readonly lsb: number;
  readonly end: Position;
}

// Numbers of symbols that have no record: from `WIRE` on the wires, by their nets, and from
// `INSTANCE` on the instances, by their numbers.
const WIRE = 1 << 29;
const INSTANCE = 1 << 30;

const WIRE_TRAITS = SymbolKind.Signal | (Flag.Typed << FLAGS);

/**
 * The names of one scope: sixteen bytes for most, and next to nothing for the plain wires and the
 * instances of a netlist, of which a module may have a million.
 */
export class SymbolTable {
  /** Only of a table that has become too long for looking at each of its names. */
  #index: NameIndex | undefined;
  readonly #records = new GrowableUint32(2 * RECORD);
  #rarities: Map<number, Rarity> | undefined;
  #recorded = 0;
  #wires: WireRuns | undefined;
  #positionOf: ((instance: number) => Position) | undefined;

  /** How many symbols there are, without those of `addInstance`. */
  get count(): number {
    return this.#recorded + (this.#wires?.count ?? 0);
  }

  /** The symbol at a place below `count`, in the order in which they were added. */
  at(place: number): number {
    if (this.#wires === undefined) return place;
    const found = this.#wires.at(place);
    return found < 0 ? -1 - found : WIRE + found;
  }

  /** All names. */
  *names(): Iterable<NameId> {
    for (let place = 0; place < this.count; place++) yield this.name(this.at(place));
    if (this.#positionOf === undefined) return;
    for (const [name, symbol] of this.#index!) if (symbol >= INSTANCE) yield name;
  }

  /** Makes room for the names of so many symbols more, which are all below `end`. */
  reserve(more: number, end: NameId): void {
    this.#madeIndex().reserve(more, end);
  }

  /** The symbol of a name, or -1. */
  find(name: NameId): number {
    if (this.#index !== undefined) return this.#index.get(name);
    for (let symbol = 0; symbol < this.#recorded; symbol++) {
      if (this.#get(symbol, Field.Name) === name) return symbol;
    }
    return -1;
  }

  /**
   * The net of a name that is a signal of one bit, and no variable where `drives` asks for a net;
   * else -1. Nearly all connections of a netlist are such.
   */
  scalar(name: NameId, drives: boolean): number {
    const symbol = this.find(name);
    return symbol < 0 ? -1 : this.scalarAt(symbol, drives);
  }

  /** As `scalar`, of a symbol. */
  scalarAt(symbol: number, drives: boolean): number {
    if (symbol >= WIRE) return symbol < INSTANCE ? symbol - WIRE : -1;
    const records = this.#records;
    const at = symbol * RECORD;
    const traits = records.get(at + Field.Traits);
    if ((traits & KIND) !== SymbolKind.Signal) return -1;
    if ((traits & RARE) !== 0 && this.width(symbol) !== 1) return -1;
    if (drives && ((traits >> FLAGS) & Flag.Variable) !== 0) return -1;
    return records.get(at + Field.Value);
  }

  /** The net of a symbol that `addWire` has made and nothing has changed since, else -1. */
  plainNet(symbol: number): number {
    if (symbol < WIRE || symbol >= INSTANCE) return -1;
    return this.#wires!.isChanged(symbol - WIRE) ? -1 : symbol - WIRE;
  }

  /** The net of a bit of a symbol that is a vector with such a bit; else, as for `scalar`, -1. */
  bitAt(symbol: number, index: number, drives: boolean): number {
    if (this.kind(symbol) !== SymbolKind.Signal) return -1;
    const flags = this.flags(symbol);
    if ((flags & Flag.Vector) === 0 || (drives && (flags & Flag.Variable) !== 0)) return -1;
    const msb = this.msb(symbol);
    const lsb = this.lsb(symbol);
    const bit = lsb <= msb ? index - lsb : lsb - index;
    return bit >= 0 && bit <= Math.abs(msb - lsb) ? this.value(symbol) + bit : -1;
  }

  /** Adds a symbol; the name must be new. */
  add(symbol: NewSymbol): number {
    const {
      name,
      value,
      start,
      end,
      flags = 0,
      netClass = NetClass.Plain,
      msb = 0,
      lsb = 0,
    } = symbol;
    const length = end - start;
    const isRare = msb !== 0 || lsb !== 0 || length < 0 || length > MOST_LENGTH;
    if (isRare) {
      this.#rarities ??= new Map();
      this.#rarities.set(this.#recorded, { msb, lsb, end });
    }
    const kind = symbol.kind | (isRare ? RARE : 0);
    const traits = kind | (flags << FLAGS) | (netClass << CLASS) | (isRare ? 0 : length << LENGTH);
    const id = this.#recorded;
    if (this.#index === undefined && id === SHORT) this.#madeIndex();
    this.#index?.set(name, id);
    this.#records.pushFour(name, traits, value, start);
    this.#recorded++;
    return id;
  }

  /** Adds a scalar wire of a net class that has the name at an index of `names`, which is new. */
  addWire(names: PlainNames, index: number, net: number, netClass: number): void {
    this.#wires ??= new WireRuns();
    this.#wires.add(names, index, net, WIRE_TRAITS | (netClass << CLASS), this.#recorded);
    this.#madeIndex().set(names.name(index), WIRE + net);
  }

  /**
   * Adds an instance under a new name. `positionOf` tells where the instance of a number stands, and
   * is the same for all.
   */
  addInstance(name: NameId, number: number, positionOf: (number: number) => Position): void {
    this.#positionOf = positionOf;
    this.#madeIndex().set(name, INSTANCE + number);
  }

  name(symbol: number): NameId {
    return this.#get(symbol, Field.Name);
  }

  /** A `SymbolKind`. */
  kind(symbol: number): number {
    return this.#get(symbol, Field.Traits) & KIND;
  }

  value(symbol: number): number {
    return this.#get(symbol, Field.Value);
  }

  start(symbol: number): Position {
    return this.#get(symbol, Field.Start);
  }

  /** End of the name's text, or its start where only a message needs to find it out. */
  end(symbol: number): Position {
    if (symbol >= WIRE && symbol < INSTANCE) return this.#wires!.end(symbol - WIRE);
    const length = this.#get(symbol, Field.Traits) >>> LENGTH;
    return this.#rarity(symbol)?.end ?? this.start(symbol) + length;
  }

  /** `Flag` bits. */
  flags(symbol: number): number {
    return (this.#get(symbol, Field.Traits) >> FLAGS) & BYTE;
  }

  addFlags(symbol: number, flags: number): void {
    this.#setTraits(symbol, this.#get(symbol, Field.Traits) | (flags << FLAGS));
  }

  /** A `NetClass`. */
  netClass(symbol: number): number {
    return (this.#get(symbol, Field.Traits) >> CLASS) & NIBBLE;
  }

  setNetClass(symbol: number, netClass: number): void {
    const others = this.#get(symbol, Field.Traits) & ~(NIBBLE << CLASS);
    this.#setTraits(symbol, others | (netClass << CLASS));
  }

  /** Declared left index, also of a parameter's bits; 0 for a scalar. */
  msb(symbol: number): number {
    return this.#rarity(symbol)?.msb ?? 0;
  }

  /** Declared right index, also of a parameter's bits; 0 for a scalar. */
  lsb(symbol: number): number {
    return this.#rarity(symbol)?.lsb ?? 0;
  }

  /** Number of bits: of a signal, or of one word of a memory. */
  width(symbol: number): number {
    const rarity = this.#rarity(symbol);
    return rarity === undefined ? 1 : Math.abs(rarity.msb - rarity.lsb) + 1;
  }

  #rarity(symbol: number): Rarity | undefined {
    if ((this.#get(symbol, Field.Traits) & RARE) === 0) return undefined;
    return this.#rarities!.get(symbol);
  }

  #madeIndex(): NameIndex {
    if (this.#index !== undefined) return this.#index;
    this.#index = new NameIndex(2 * SHORT);
    for (let symbol = 0; symbol < this.#recorded; symbol++) {
      this.#index.set(this.name(symbol), symbol);
    }
    return this.#index;
  }

  #get(symbol: number, field: number): number {
    if (symbol >= WIRE) return this.#withoutRecord(symbol, field);
    return this.#records.get(symbol * RECORD + field);
  }

  #withoutRecord(symbol: number, field: number): number {
    if (symbol >= INSTANCE) {
      const number = symbol - INSTANCE;
      if (field === Field.Value) return number;
      return field === Field.Traits ? SymbolKind.Instance : this.#positionOf!(number);
    }
    const net = symbol - WIRE;
    if (field === Field.Value) return net;
    const wires = this.#wires!;
    if (field === Field.Traits) return wires.traits(net);
    return field === Field.Name ? wires.name(net) : wires.start(net);
  }

  #setTraits(symbol: number, traits: number): void {
    if (symbol < WIRE) this.#records.set(symbol * RECORD + Field.Traits, traits);
    else this.#wires!.setTraits(symbol - WIRE, traits);
  }
}
