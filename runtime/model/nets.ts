import { formatValue } from '../valueText.js';
import type { Core } from './core.js';
import type { Description, KeptMemory, KeptNet } from './description.js';
import { readValue, shown, type Value } from './values.js';

/** What is looked at: a model, or a lane of it. */
export type Looked = Pick<Core, 'layout' | 'memories' | 'probed' | 'row' | 'state'> & {
  readonly description: Pick<Description, 'nets' | 'memories' | 'probes'>;
};

/** Looks at kept nets by name. */
export class Nets {
  readonly list: readonly KeptNet[];
  readonly #core: Looked;
  readonly #byName: ReadonlyMap<string, KeptNet>;

  constructor(core: Looked) {
    this.#core = core;
    this.list = core.description.nets;
    this.#byName = new Map(this.list.map((net) => [net.name, net]));
  }

  /** The value of a net at this moment. Throws RangeError for a name that was not kept. */
  peek(name: string): Value {
    const net = this.#byName.get(name);
    if (net === undefined) return this.#word(name);
    return typeof net.from === 'number' ? this.#probe(net, net.from) : this.#state(net, net.from);
  }

  // `name[index]`, or `name[index][index]` where there are several.
  #word(text: string): Value {
    const { layout, description } = this.#core;
    for (const { name, width, indices, from } of description.memories) {
      const word = text?.startsWith?.(name) ? wordOf(indices, text.slice(name.length)) : -1;
      if (word < 0) continue;
      const bytes = this.#core.memories();
      const group = (width + 7) >>> 3;
      const at = from + word * group * (layout.threeValued ? 2 : 1);
      const bit = (i: number): number => (bytes[at + (i >>> 3)]! >>> (i & 7)) & 1;
      const isUnknown = (i: number): boolean => layout.threeValued && bit(i + 8 * group) === 1;
      return joined({ name, width }, (i) => (isUnknown(i) ? 2 : bit(i)));
    }
    const names = 'a port, a kept net or a word of a memory';
    throw new RangeError(`expected ${names}, got ${shown(text)}; see nets and memories`);
  }

  #probe({ name, width }: KeptNet, offset: number): Value {
    const group = this.#core.description.probes!.layout.outputs;
    return readValue(this.#core.row(this.#core.probed(), group), { name, width, offset });
  }

  #state(net: KeptNet, elements: readonly number[]): Value {
    const state = this.#core.state();
    return joined(net, (bit) => state[elements[bit]!]!);
  }
}

/** The value that bits make, each 0, 1 or 2 for x. */
function joined({ name, width }: Pick<KeptNet, 'name' | 'width'>, bit: (i: number) => number) {
  const words = (width + 31) >>> 5;
  const row = new Uint32Array(2 * words);
  for (let i = 0; i < width; i++) {
    const value = bit(i);
    if (value > 0) row[(value - 1) * words + (i >>> 5)]! |= 1 << (i & 31);
  }
  return readValue({ words: row, at: 0, unknownAt: words }, { name, width, offset: 0 });
}

/** The word that a text of indices such as `[3]` or `[-1][8]` means, -1 where there is none. */
export function wordOf(indices: KeptMemory['indices'], text: string): number {
  const given = text.match(/-?\d+/g) ?? [];
  if (given.map((index) => `[${index}]`).join('') !== text || given.length !== indices.length) {
    return -1;
  }
  return indices.reduce((word, { low, size }, i) => {
    const element = Number(given[i]) - low;
    return word < 0 || element < 0 || element >= size ? -1 : word * size + element;
  }, 0);
}

/** A value as the tables of `clockstride run` write it: `0`, `1`, `x`, `0x…` or `0b…`. */
export function valueText(value: Value, width: number): string {
  if (typeof value === 'string') return value;
  const words = new Uint32Array((width + 31) >>> 5);
  for (let i = 0; i < words.length; i++) {
    words[i] = Number((BigInt(value) >> BigInt(32 * i)) & 0xffffffffn);
  }
  return formatValue({ offset: 0, width }, words, 0, undefined);
}
