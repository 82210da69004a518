import { formatValue } from '../valueText.js';
import type { Core } from './core.js';
import type { KeptNet } from './description.js';
import { readValue, shown, type Value } from './values.js';

/** Looks at kept nets by name. */
export class Nets {
  readonly list: readonly KeptNet[];
  readonly #core: Core;
  readonly #byName: ReadonlyMap<string, KeptNet>;

  constructor(core: Core) {
    this.#core = core;
    this.list = core.description.nets;
    this.#byName = new Map(this.list.map((net) => [net.name, net]));
  }

  /** The value of a net at this moment. Throws RangeError for a name that was not kept. */
  peek(name: string): Value {
    const net = this.#byName.get(name);
    if (net === undefined) {
      throw new RangeError(`expected a port or a kept net, got ${shown(name)}; see nets`);
    }
    return typeof net.from === 'number' ? this.#probe(net, net.from) : this.#state(net, net.from);
  }

  #probe({ name, width }: KeptNet, offset: number): Value {
    const group = this.#core.description.probes!.layout.outputs;
    return readValue(this.#core.row(this.#core.probed(), group), { name, width, offset });
  }

  #state({ name, width }: KeptNet, elements: readonly number[]): Value {
    const state = this.#core.state();
    const words = (width + 31) >>> 5;
    const row = new Uint32Array(2 * words);
    for (const [bit, element] of elements.entries()) {
      const value = state[element]!;
      if (value === 1) row[bit >>> 5]! |= 1 << (bit & 31);
      if (value === 2) row[words + (bit >>> 5)]! |= 1 << (bit & 31);
    }
    return readValue({ words: row, at: 0, unknownAt: words }, { name, width, offset: 0 });
  }
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
