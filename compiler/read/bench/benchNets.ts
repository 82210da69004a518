import type { CircuitBuilder } from '../../circuit/builder.js';
import { GateKind } from '../../circuit/gates.js';
import { GrowableUint32 } from '../../circuit/growable.js';
import type { ModuleNames } from '../../circuit/hierarchy.js';
import { type NetId, netId } from '../../circuit/ids.js';
import type { Source, Span } from '../../diagnostics/source.js';
import { type NameId, NameTable } from '../names.js';

const NOT_DEFINED = 0xffffffff;

/** The nets of a `.bench` text by name, and where each was first named and defined. */
export class BenchNets {
  readonly #source: Source;
  readonly #builder: CircuitBuilder;
  readonly #names = new NameTable();
  // One entry per name; that of the empty name, 0, is unused.
  readonly #net = new GrowableUint32();
  readonly #firstUse = new GrowableUint32();
  readonly #definition = new GrowableUint32();

  constructor(source: Source, builder: CircuitBuilder) {
    this.#source = source;
    this.#builder = builder;
    this.#add(0, 0);
  }

  /** The name that stands at a stretch of the source; its net is made when first met. */
  at(start: number, end: number): NameId {
    const name = this.#names.intern(this.#source.bytes, start, end);
    if (name === this.#net.length) {
      this.#builder.at(0, start);
      this.#add(this.#builder.net(), start);
    }
    return name;
  }

  net(name: NameId): NetId {
    return netId(this.#net.get(name));
  }

  text(name: NameId): string {
    return this.#names.text(name);
  }

  /** Puts on record that a name is defined at an offset; false if it was defined before. */
  define(name: NameId, offset: number): boolean {
    if (this.#definition.get(name) !== NOT_DEFINED) return false;
    this.#definition.set(name, offset);
    return true;
  }

  /** Where a name was defined. */
  definitionOf(name: NameId): Span {
    return this.spanAt(name, this.#definition.get(name));
  }

  /** The span of a name that stands at an offset. */
  spanAt(name: NameId, offset: number): Span {
    const { texts } = this.#names;
    const length = texts.end(name) - texts.start(name);
    return { source: this.#source, start: offset, end: offset + length };
  }

  /** Names that are used and not defined, with their first use, in the order of the text. */
  undefinedNames(): { readonly name: NameId; readonly span: Span }[] {
    const found: { name: NameId; span: Span }[] = [];
    for (let name = 1; name < this.#net.length; name++) {
      if (this.#definition.get(name) === NOT_DEFINED) {
        found.push({ name, span: this.spanAt(name, this.#firstUse.get(name)) });
      }
    }
    return found;
  }

  /** A new name for a net that the text does not mention: `base`, or `base_1`, … if taken. */
  addUnnamed(base: string, net: NetId): string {
    let text = base;
    for (let suffix = 1; this.#names.internText(text) < this.#net.length; suffix++) {
      text = `${base}_${suffix}`;
    }
    this.#add(net, 0);
    return text;
  }

  /** Publishes all names as scalars of one module. */
  publish(moduleName: string): void {
    const count = this.#net.length - 1;
    const signals = Array.from({ length: count }, (_, offset) => ({
      name: this.text(offset + 1),
      msb: 0,
      lsb: 0,
      isVector: false,
      offset,
      width: 1,
    }));
    const module: ModuleNames = { name: moduleName, signals, bits: count };
    const { hierarchy } = this.#builder;
    hierarchy.addScope(moduleName, 0, hierarchy.addModule(module), this.#net.take().subarray(1));
  }

  /** Drives by a constant what is used and not defined, and called `vdd` or `gnd`. */
  defineSupplies(): void {
    for (const { name, span } of this.undefinedNames()) {
      const text = this.text(name).toLowerCase();
      if (text !== 'vdd' && text !== 'gnd') continue;
      this.define(name, span.start);
      this.#builder.at(0, span.start);
      this.#builder.drive(this.net(name), text === 'vdd' ? GateKind.One : GateKind.Zero, []);
    }
  }

  #add(net: number, firstUse: number): void {
    this.#net.push(net);
    this.#firstUse.push(firstUse);
    this.#definition.push(NOT_DEFINED);
  }
}
