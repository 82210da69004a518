import { GrowableUint32 } from '../../../circuit/growable.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { Origin } from './recording.js';

/** A net of a child that is no port, and the net of the parent that it is one with. */
export interface Import {
  readonly childNet: NetId;
  readonly net: NetId;
}

/**
 * The instances inside a module, as columns: which template, under which name, and the parent's
 * net for each net of the template's boundary (`NO_NET` where unconnected).
 */
export class Children {
  readonly #template = new GrowableUint32(2);
  readonly #name = new GrowableUint32(2);
  readonly #block = new GrowableUint32(2);
  readonly #source = new GrowableUint32(2);
  readonly #offset = new GrowableUint32(2);
  readonly #portStart = new GrowableUint32(2);
  readonly #ports = new GrowableUint32(8);
  readonly #imports = new Map<number, Import[]>();

  get count(): number {
    return this.#template.length;
  }

  /**
   * Adds an instance of a template with nothing connected to its boundary of `width` nets. `name`
   * is 0 where it shall make no scope.
   */
  add(template: number, name: NameId, block: number, origin: Origin, width: number): number {
    this.#template.push(template);
    this.#name.push(name);
    this.#block.push(block);
    this.#source.push(origin.source);
    this.#offset.push(origin.offset);
    this.#portStart.push(this.#ports.length);
    this.#ports.extend(width, NO_NET);
    return this.#template.length - 1;
  }

  template(child: number): number {
    return this.#template.get(child);
  }

  name(child: number): NameId {
    return this.#name.get(child);
  }

  /** The block of the module that the instance stands in; 0 for the module itself. */
  block(child: number): number {
    return this.#block.get(child);
  }

  origin(child: number): Origin {
    return { source: this.#source.get(child), offset: this.#offset.get(child) };
  }

  /** The parent's net at a place of the template's boundary. */
  port(child: number, place: number): NetId {
    return netId(this.#ports.get(this.#portStart.get(child) + place));
  }

  setPort(child: number, place: number, net: NetId): void {
    this.#ports.set(this.#portStart.get(child) + place, net);
  }

  /** Calls `visit` for each net of the parent that is connected to a child. */
  forEachNet(visit: (net: NetId) => void): void {
    for (let i = 0; i < this.#ports.length; i++) {
      const net = this.#ports.get(i);
      if (net !== NO_NET) visit(netId(net));
    }
    for (const imports of this.#imports.values()) for (const { net } of imports) visit(net);
  }

  /** Nets of the child that the parent reaches by hierarchical names. */
  imports(child: number): readonly Import[] {
    return this.#imports.get(child) ?? [];
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
      return net;
    }
    const imports = this.#imports.get(child) ?? [];
    const known = imports.find((each) => each.childNet === childNet);
    if (known !== undefined) return known.net;
    const net = make();
    imports.push({ childNet, net });
    this.#imports.set(child, imports);
    return net;
  }
}
