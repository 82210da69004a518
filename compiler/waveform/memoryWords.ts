import { AddedGates } from '../circuit/addedGates.js';
import { type AddedSignal, withSignals } from '../circuit/addedSignals.js';
import type { Circuit } from '../circuit/circuit.js';
import { GateKind } from '../circuit/gates.js';
import { type Hierarchy, scopePath } from '../circuit/hierarchy.js';
import { type Memory, type MemoryIndex, moduloPower } from '../circuit/memory.js';
import { namePattern } from './namePattern.js';
import { UnmatchedPattern } from './signalList.js';

/** Most words of memories that are shown. */
export const MOST_WORDS = 4096;

/** A circuit of which words of memories are signals. */
export interface ShownWords {
  /** The circuit given where there are none. */
  readonly circuit: Circuit;
  /** The patterns, by which `signalsOf` now finds the words too. */
  readonly patterns: readonly string[];
}

/**
 * Makes those words of memories signals that patterns choose by their indices: `cpu.ram[5]`,
 * `cpu.ram[0:15]`, and `cpu.ram[5][3:0]` for a part of one. What else patterns choose is left to
 * `signalsOf`. Throws `UnmatchedPattern` for words that are not there, and for too many.
 */
export function withMemoryWords(
  circuit: Circuit,
  patterns: readonly string[],
  threeValued: boolean,
): ShownWords {
  if (circuit.memories.length === 0) return { circuit, patterns };
  const words = new Words(circuit, threeValued);
  const chosen = patterns.flatMap((text) => words.choose(text));
  return { circuit: words.finish(), patterns: chosen };
}

class Words {
  readonly #circuit: Circuit;
  readonly #gates: AddedGates;
  readonly #signals = new Map<string, AddedSignal>();

  constructor(circuit: Circuit, threeValued: boolean) {
    this.#circuit = circuit;
    this.#gates = new AddedGates(circuit, threeValued);
  }

  /** Adds the words that a pattern chooses, if any; returns patterns that name each alone. */
  choose(text: string): string[] {
    const [, base, brackets] = /^(.+?)((?:\[-?\d+(?::-?\d+)?\])+)$/.exec(text) ?? [];
    if (base === undefined) return [text];
    const pattern = namePattern(base);
    const ranges = Array.from(brackets!.matchAll(/-?\d+(?::-?\d+)?/g), ([part]) => part);
    const found = new Set<string>();
    for (const [number, memory] of this.#circuit.memories.entries()) {
      const { name, indices } = memory;
      const isMeant = pattern.matches(name) || pattern.matches(`${this.#circuit.name}.${name}`);
      if (!isMeant || ranges.length < indices.length) continue;
      const part = ranges.slice(indices.length).map((range) => `[${range}]`);
      for (const place of placesIn(text, memory, ranges)) {
        this.#add(number, place);
        found.add(`${base}${placeText(place)}${part.join('')}`);
      }
    }
    return found.size === 0 ? [text] : [...found];
  }

  finish(): Circuit {
    if (this.#signals.size === 0) return this.#circuit;
    const circuit = this.#gates.finish();
    return { ...circuit, hierarchy: withSignals(circuit.hierarchy, [...this.#signals.values()]) };
  }

  #add(number: number, place: readonly number[]): void {
    const key = `${number} ${place.join()}`;
    if (this.#signals.has(key)) return;
    if (this.#signals.size === MOST_WORDS) {
      throw new UnmatchedPattern(`at most ${MOST_WORDS} words of memories can be shown`);
    }
    const { name, width, indices, word } = this.#circuit.memories[number]!;
    const gates = this.#gates;
    const address = indices.flatMap(({ bits }, i) => {
      const value = BigInt(moduloPower(place[i]!, bits));
      return Array.from({ length: bits }, (_, bit) =>
        gates.gate((value >> BigInt(bit)) & 1n ? GateKind.One : GateKind.Zero, []),
      );
    });
    const { scope, local } = placeOf(this.#circuit.hierarchy, name);
    const { msb = width - 1, lsb = 0, isSigned = false } = word ?? {};
    this.#signals.set(key, {
      ...{ scope, name: `${local}${placeText(place)}`, msb, lsb },
      // A word of one bit that is declared without a range is a scalar.
      ...{ isVector: width > 1, isSigned, nets: gates.readMemory(number, address) },
    });
  }
}

const placeText = (place: readonly number[]): string => place.map((index) => `[${index}]`).join('');

/** The words, by their indices, that some ranges mean in a memory. */
function placesIn(text: string, memory: Memory, ranges: readonly string[]): number[][] {
  let places: number[][] = [[]];
  for (const [i, index] of memory.indices.entries()) {
    const values = valuesIn(text, memory, ranges[i]!, index);
    if (places.length * values.length > MOST_WORDS) {
      throw new UnmatchedPattern(`${text}: at most ${MOST_WORDS} words of memories can be shown`);
    }
    places = places.flatMap((place) => values.map((value) => [...place, value]));
  }
  return places;
}

function valuesIn(text: string, { name }: Memory, range: string, { low, size }: MemoryIndex) {
  const [left, right = left] = range.split(':').map(Number) as [number, number?];
  const high = low + size - 1;
  if (Math.min(left, right) < low || Math.max(left, right) > high) {
    throw new UnmatchedPattern(`${text}: ${name} has the words [${low}:${high}]`);
  }
  const step = left <= right ? 1 : -1;
  const count = Math.min(Math.abs(right - left), MOST_WORDS) + 1;
  return Array.from({ length: count }, (_, i) => left + step * i);
}

/** The scope that a full name leads to, and what is left of the name there. */
function placeOf(hierarchy: Hierarchy, name: string): { scope: number; local: string } {
  let best = { scope: 0, local: name };
  for (let scope = 1; scope < hierarchy.scopeModule.length; scope++) {
    const path = `${scopePath(hierarchy, scope)}.`;
    const isDeeper = name.length - path.length < best.local.length;
    if (isDeeper && name.startsWith(path)) best = { scope, local: name.slice(path.length) };
  }
  return best;
}
