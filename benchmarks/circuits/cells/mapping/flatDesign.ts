import type { Definition } from '../../nets.js';
import { type Child, type LocalNet, structuresOf } from './structure.js';
import { mapModule, type Template } from './template.js';

/** Number of a net in the flat design; 0 and 1 are the constants. */
export type FlatNet = number;

/** One place of a module in the design. */
export interface Place {
  /** Path of the instance with a `/` after each name; empty for the top. */
  readonly path: string;
  readonly template: Template;
  /** Number of its first net. */
  readonly base: FlatNet;
  /** The place around it, and the instance there; undefined for the top. */
  readonly outer: { readonly place: Place; readonly child: Child } | undefined;
}

/** A design without hierarchy. A net is numbered once for each place it is reached from. */
export class FlatDesign {
  readonly top: Template;
  /** The places of all modules, each after the one around it. */
  readonly places: readonly Place[];
  readonly #parent: Int32Array;

  constructor(definition: Definition, hasClockGates: boolean) {
    const templates = new Map<string, Template>();
    for (const [name, structure] of structuresOf(definition)) {
      templates.set(name, mapModule(structure, hasClockGates));
    }
    this.top = templates.get(definition.name)!;
    this.places = placesOf(this.top, templates);
    const { base, template } = this.places.at(-1)!;
    this.#parent = Int32Array.from({ length: base + template.netNames.length }, (_, net) => net);
    for (const place of this.places) this.#connect(place);
  }

  /** The number that stands for all numbers of a net: the one of the outermost place. */
  net(place: Place, local: LocalNet): FlatNet {
    return this.#find(place.base + local);
  }

  /** How many numbers there are; not all of them stand for a net. */
  get netCount(): number {
    return this.#parent.length;
  }

  /** Whether the number stands for a net. */
  isNet(net: FlatNet): boolean {
    return this.#parent[net] === net;
  }

  /** The place that numbered a net. */
  placeOf(net: FlatNet): Place {
    let low = 0;
    let high = this.places.length;
    while (high - low > 1) {
      const middle = (low + high) >>> 1;
      if (this.places[middle]!.base <= net) low = middle;
      else high = middle;
    }
    return this.places[low]!;
  }

  #connect({ template, base, outer }: Place): void {
    const { structure } = template;
    this.#join(0, base);
    this.#join(1, base + 1);
    for (const [left, right] of structure.joins) this.#join(base + left, base + right);
    if (outer === undefined) return;
    for (const { name, nets } of structure.ports) {
      const connected = outer.child.pins.get(name) ?? [];
      for (const [i, net] of connected.entries())
        this.#join(outer.place.base + net, base + nets[i]!);
    }
  }

  #join(left: FlatNet, right: FlatNet): void {
    const [a, b] = [this.#find(left), this.#find(right)];
    this.#parent[Math.max(a, b)] = Math.min(a, b);
  }

  #find(net: FlatNet): FlatNet {
    const parent = this.#parent;
    let root = net;
    while (parent[root] !== root) root = parent[root]!;
    for (let at = net; at !== root; ) {
      const next = parent[at]!;
      parent[at] = root;
      at = next;
    }
    return root;
  }
}

function placesOf(top: Template, templates: ReadonlyMap<string, Template>): Place[] {
  const places: Place[] = [{ path: '', template: top, base: 0, outer: undefined }];
  let base = top.netNames.length;
  // The list grows while it is gone through, level by level.
  for (const place of places) {
    for (const child of place.template.structure.children) {
      const template = templates.get(child.module)!;
      const path = `${place.path}${child.name}/`;
      places.push({ path, template, base, outer: { place, child } });
      base += template.netNames.length;
    }
  }
  return places;
}
