import { type BlockScope, wordsOf } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { SignalTable } from './signalTable.js';
import { Flag, SymbolKind } from './symbols.js';
import type { BlockNames } from './template.js';

/** The names of a module and of the blocks inside it, with the nets behind them. */
export function blockNamesOf(body: ModuleBody, find: (net: number) => number): BlockNames[] {
  return body.blocks.map((block) => {
    const collector = new NameCollector(body, block, find);
    collector.collect();
    const { signals, nets } = collector;
    const name = body.text(block.name);
    return {
      name,
      parent: block.parent?.index ?? 0,
      names: { name, signals, bits: nets.length },
      nets,
    };
  });
}

class NameCollector {
  readonly signals: SignalTable;
  readonly nets: Uint32Array;
  readonly #body: ModuleBody;
  readonly #block: BlockScope;
  readonly #find: (net: number) => number;

  constructor(body: ModuleBody, block: BlockScope, find: (net: number) => number) {
    this.nets = new Uint32Array(bitsOf(block));
    const expected = Math.min(block.symbols.count, this.nets.length);
    this.signals = new SignalTable(body.names.texts, expected);
    this.#body = body;
    this.#block = block;
    this.#find = find;
  }

  collect(): void {
    const { symbols } = this.#block;
    for (let place = 0; place < symbols.count; place++) {
      const symbol = symbols.at(place);
      const plain = symbols.plainNet(symbol);
      if (plain >= 0) {
        this.nets[this.signals.bits] = this.#find(plain);
        this.signals.pushScalar(symbols.name(symbol));
        continue;
      }
      const kind = symbols.kind(symbol);
      if (kind === SymbolKind.Signal) this.#add(symbol, symbols.value(symbol));
      else if (kind === SymbolKind.Memory) this.#addWords(symbol);
    }
  }

  #addWords(symbol: number): void {
    const name = this.#body.text(this.#block.symbols.name(symbol));
    for (const { first, index } of this.#block.vectors(symbol)) {
      this.#add(symbol, first, `${name}${index}`);
    }
  }

  /** Adds a signal, or a word of a memory, whose nets begin at `first`. */
  #add(symbol: number, first: number, text?: string): void {
    const { symbols } = this.#block;
    const { signals, nets } = this;
    const offset = signals.bits;
    const flags = symbols.flags(symbol);
    const isVector = (flags & Flag.Vector) !== 0;
    const isSigned = (flags & Flag.Signed) !== 0;
    if (!isVector && !isSigned && text === undefined) signals.pushScalar(symbols.name(symbol));
    else {
      const [msb, lsb] = [symbols.msb(symbol), symbols.lsb(symbol)];
      signals.push(symbols.name(symbol), { msb, lsb, isVector, isSigned, name: text });
    }
    for (let at = offset; at < signals.bits; at++) nets[at] = this.#find(first + at - offset);
  }
}

function bitsOf({ symbols, memories }: BlockScope): number {
  let bits = 0;
  for (let place = 0; place < symbols.count; place++) {
    const symbol = symbols.at(place);
    if (symbols.plainNet(symbol) >= 0) {
      bits++;
      continue;
    }
    const kind = symbols.kind(symbol);
    if (kind === SymbolKind.Signal) bits += symbols.width(symbol);
    if (kind !== SymbolKind.Memory) continue;
    const { indices, held } = memories[symbols.value(symbol)]!;
    if (held === undefined) bits += wordsOf(indices) * symbols.width(symbol);
  }
  return bits;
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
