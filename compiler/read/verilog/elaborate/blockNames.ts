import type { Signal } from '../../../circuit/hierarchy.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { Flag, SymbolKind } from './symbols.js';
import type { BlockNames } from './template.js';

/** The names of a module and of the blocks inside it, with the nets behind them. */
export function blockNamesOf(body: ModuleBody, find: (net: number) => number): BlockNames[] {
  return body.blocks.map((block) => {
    const collector = new NameCollector(bitsOf(block), find);
    collectSignals(body, block, collector);
    const { signals, nets } = collector;
    const name = body.text(block.name);
    return {
      name,
      parent: block.parent?.index ?? 0,
      names: { name, signals, bits: nets.length },
      nets,
      scratch: new Uint32Array(nets.length),
    };
  });
}

class NameCollector {
  readonly signals: Signal[] = [];
  readonly nets: Uint32Array;
  readonly #find: (net: number) => number;
  #offset = 0;

  constructor(bits: number, find: (net: number) => number) {
    this.nets = new Uint32Array(bits);
    this.#find = find;
  }

  /** Adds a signal, or a word of a memory, whose nets begin at `first`. */
  add(name: string, { symbols }: BlockScope, symbol: number, first: number): void {
    const width = symbols.width(symbol);
    const offset = this.#offset;
    this.signals.push({
      name,
      msb: symbols.msb(symbol),
      lsb: symbols.lsb(symbol),
      isVector: (symbols.flags(symbol) & Flag.Vector) !== 0,
      offset,
      width,
    });
    for (let bit = 0; bit < width; bit++) this.nets[offset + bit] = this.#find(first + bit);
    this.#offset += width;
  }
}

function bitsOf({ symbols, memories }: BlockScope): number {
  let bits = 0;
  for (let symbol = 0; symbol < symbols.count; symbol++) {
    const kind = symbols.kind(symbol);
    if (kind === SymbolKind.Signal) bits += symbols.width(symbol);
    if (kind !== SymbolKind.Memory) continue;
    const { low, high } = memories[symbols.value(symbol)]!;
    bits += (high - low + 1) * symbols.width(symbol);
  }
  return bits;
}

function collectSignals(body: ModuleBody, block: BlockScope, collector: NameCollector): void {
  const { symbols, memories } = block;
  for (let symbol = 0; symbol < symbols.count; symbol++) {
    const kind = symbols.kind(symbol);
    const value = symbols.value(symbol);
    if (kind === SymbolKind.Signal) {
      collector.add(body.text(symbols.name(symbol)), block, symbol, value);
    } else if (kind === SymbolKind.Memory) {
      const { first, low, high } = memories[value]!;
      const name = body.text(symbols.name(symbol));
      const width = symbols.width(symbol);
      for (let address = low; address <= high; address++) {
        collector.add(`${name}[${address}]`, block, symbol, first + (address - low) * width);
      }
    }
  }
}

/** `[3:0]` for a run of bits counted from the right, else `[7]`, `[5]` and so on. */
export function bitList(
  symbols: { msb(symbol: number): number; lsb(symbol: number): number },
  symbol: number,
  bits: readonly number[],
): string {
  const msb = symbols.msb(symbol);
  const lsb = symbols.lsb(symbol);
  const index = (bit: number): number => (lsb <= msb ? lsb + bit : lsb - bit);
  const first = bits[0]!;
  const last = bits[bits.length - 1]!;
  if (first === last) return `[${index(first)}]`;
  if (last - first === bits.length - 1) return `[${index(last)}:${index(first)}]`;
  return bits.length <= 8
    ? ` (bits ${bits.map(index).join(', ')})`
    : ` (${bits.length} of its bits)`;
}
