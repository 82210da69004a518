import type { Circuit } from '../circuit/circuit.js';
import { GrowableUint32 } from '../circuit/growable.js';
import { declaredIndex, type Hierarchy, type Signal, scopePath } from '../circuit/hierarchy.js';
import { type NamePattern, namePattern } from './namePattern.js';

/**
 * Signals of a netlist, or parts of them, in the order in which they are shown: one entry of each
 * array per signal.
 */
export interface SignalList {
  readonly count: number;
  /** Scope of the signal, and its index in the scope's module. */
  readonly scope: Uint32Array;
  readonly signal: Uint32Array;
  /** Its first bit that is shown, counted from the right, and how many there are. */
  readonly low: Uint32Array;
  readonly width: Uint32Array;
  /** Place among `nets` of its first bit. Signals of the same nets stand at the same place. */
  readonly place: Uint32Array;
  /** The nets to watch. */
  readonly nets: Uint32Array;
}

/** Thrown for a pattern that chooses nothing; the message says what there is. */
export class UnmatchedPattern extends Error {}

/**
 * The signals that patterns choose, pattern by pattern, each once; all of the netlist without
 * patterns. A pattern may begin with the name of the top module or leave it out.
 *
 * Throws `UnmatchedPattern`.
 */
export function signalsOf(circuit: Circuit, patterns: readonly string[]): SignalList {
  const collector = new Collector(circuit);
  if (patterns.length === 0) collector.addAll();
  for (const text of patterns) collector.addMatching(namePattern(text));
  return collector.finish();
}

/** The ports of the top module. */
export function portSignals(circuit: Circuit): SignalList {
  const collector = new Collector(circuit);
  const names = new Set([...circuit.inputs, ...circuit.outputs].map(({ name }) => name));
  collector.addTop((signal) => names.has(signal.name));
  return collector.finish();
}

/** The dotted name of a signal of the list: `cpu.acc`, or `cpu.acc[3:0]` for a part. */
export function signalName(hierarchy: Hierarchy, list: SignalList, index: number): string {
  const signal = signalAt(hierarchy, list.scope[index]!, list.signal[index]!);
  const part = partText(signal, list.low[index]!, list.width[index]!);
  return signalPath(hierarchy, list, index) + part;
}

/** The dotted name of a signal of the list without the part of it that is meant. */
export function signalPath(hierarchy: Hierarchy, list: SignalList, index: number): string {
  const path = scopePath(hierarchy, list.scope[index]!);
  const { name } = signalAt(hierarchy, list.scope[index]!, list.signal[index]!);
  return path === '' ? name : `${path}.${name}`;
}

/** The signal of a scope. */
export function signalAt({ modules, scopeModule }: Hierarchy, scope: number, index: number) {
  return modules[scopeModule[scope]!]!.signals.at(index)!;
}

/** `[7:4]` or `[3]` where less than the whole signal is meant, else nothing. */
function partText(signal: Signal, low: number, width: number): string {
  if (width === signal.width) return '';
  const right = declaredIndex(signal, low);
  return width === 1 ? `[${right}]` : `[${declaredIndex(signal, low + width - 1)}:${right}]`;
}

class Collector {
  readonly #hierarchy: Hierarchy;
  readonly #top: string;
  readonly #columns = Array.from({ length: 5 }, () => new GrowableUint32());
  readonly #nets = new GrowableUint32();
  readonly #chosen = new Set<string>();
  /** Per net: where it stands alone among `#nets`, plus 1. */
  readonly #single: Uint32Array;
  /** Places of vectors by their rightmost net and width. */
  readonly #vectors = new Map<number, number[]>();

  constructor({ hierarchy, name, netCount }: Circuit) {
    this.#hierarchy = hierarchy;
    this.#top = name;
    this.#single = new Uint32Array(netCount);
  }

  addAll(): void {
    this.#eachSignal((scope, index, signal) => this.#add(scope, index, 0, signal.width));
  }

  addTop(isWanted: (signal: Signal) => boolean): void {
    const module = this.#hierarchy.modules[this.#hierarchy.scopeModule[0]!]!;
    let index = 0;
    for (const signal of module.signals) {
      if (isWanted(signal)) this.#add(0, index, 0, signal.width);
      index++;
    }
  }

  addMatching(pattern: NamePattern): void {
    let found = false;
    let outside: string | undefined;
    this.#eachSignal((scope, index, signal, path) => {
      const name = path === '' ? signal.name : `${path}.${signal.name}`;
      const isEither = (test: (name: string) => boolean): boolean =>
        test(name) || test(`${this.#top}.${name}`);
      const part = isEither(pattern.matches)
        ? { low: 0, width: signal.width }
        : pattern.part && isEither(pattern.matchesBase) && partOf(signal, pattern.part);
      if (part === 'outside') outside = name;
      else if (part) {
        found = true;
        this.#addOnce(scope, index, part.low, part.width);
      }
    });
    if (found) return;
    const why = outside === undefined ? 'no signal has such a name' : `${outside} has no such bits`;
    throw new UnmatchedPattern(`${pattern.text}: ${why}`);
  }

  finish(): SignalList {
    const count = this.#columns[0]!.length;
    const [scope, signal, low, width, place] = this.#columns.map((column) => column.take());
    return {
      count,
      scope: scope!,
      signal: signal!,
      low: low!,
      width: width!,
      place: place!,
      nets: this.#nets.take(),
    };
  }

  #eachSignal(visit: (scope: number, index: number, signal: Signal, path: string) => void): void {
    const { scopeStart, scopeModule, modules } = this.#hierarchy;
    for (let scope = 0; scope < scopeStart.length; scope++) {
      const path = scopePath(this.#hierarchy, scope);
      let index = 0;
      for (const signal of modules[scopeModule[scope]!]!.signals) {
        visit(scope, index++, signal, path);
      }
    }
  }

  #addOnce(scope: number, index: number, low: number, width: number): void {
    const key = `${scope} ${index} ${low} ${width}`;
    if (this.#chosen.has(key)) return;
    this.#chosen.add(key);
    this.#add(scope, index, low, width);
  }

  #add(scope: number, index: number, low: number, width: number): void {
    const { scopeStart, netOf } = this.#hierarchy;
    const start = scopeStart[scope]! + signalAt(this.#hierarchy, scope, index).offset + low;
    const place = this.#placeOf(netOf.subarray(start, start + width));
    for (const [column, value] of [scope, index, low, width, place].entries()) {
      this.#columns[column]!.push(value);
    }
  }

  // A net has many names, a pin of an instance and the wire on it; it is watched once.
  #placeOf(nets: Uint32Array): number {
    const first = nets[0]!;
    if (nets.length === 1) {
      if (this.#single[first] === 0) {
        this.#nets.push(first);
        this.#single[first] = this.#nets.length;
      }
      return this.#single[first]! - 1;
    }
    const key = first * 4096 + (nets.length % 4096);
    const known = this.#vectors.get(key) ?? [];
    const same = known.find((place) =>
      nets.every((net, bit) => this.#nets.get(place + bit) === net),
    );
    if (same !== undefined) return same;
    const place = this.#nets.length;
    this.#vectors.set(key, [...known, place]);
    this.#nets.append(nets, nets.length);
    return place;
  }
}

// The place of declared indices in a signal; undefined for a scalar.
function partOf(
  { isVector, msb, lsb, width }: Signal,
  { left, right }: { readonly left: number; readonly right: number },
): { low: number; width: number } | 'outside' | undefined {
  if (!isVector) return undefined;
  const placeOf = (index: number): number => (lsb <= msb ? index - lsb : lsb - index);
  const [high, low] = [placeOf(left), placeOf(right)];
  const isInside = low >= 0 && high >= low && high < width;
  return isInside ? { low, width: high - low + 1 } : 'outside';
}
