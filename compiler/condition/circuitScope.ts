import type { Circuit } from '../circuit/circuit.js';
import { type Hierarchy, type Signal, scopePath } from '../circuit/hierarchy.js';
import { netId } from '../circuit/ids.js';
import type { NameId } from '../read/names.js';
import { InitialContents } from '../read/verilog/initialContents.js';
import type {
  Binding,
  Elaboration,
  IndexRange,
  MemoryBinding,
  Scope,
  SignalBinding,
} from '../read/verilog/scope.js';

/** What hierarchical names mean in a circuit: nets, vectors and memories, from the top on. */
export class CircuitScope implements Scope {
  readonly shared: Elaboration;
  readonly #circuit: Circuit;
  readonly #known = new Map<string, Binding | undefined>();

  constructor(circuit: Circuit, shared: Elaboration) {
    this.#circuit = circuit;
    this.shared = shared;
  }

  resolve(path: readonly NameId[]): Binding | undefined {
    const texts = path.map((name) => this.shared.names.text(name));
    const key = texts.join('\n');
    if (this.#known.has(key)) return this.#known.get(key);
    const [first, ...rest] = texts;
    const isTop = first === this.#circuit.name && rest.length > 0;
    const found = this.#within(0, texts) ?? (isTop ? this.#within(0, rest) : undefined);
    this.#known.set(key, found);
    return found;
  }

  /** The full names of all signals and memories. */
  *visibleNames(): Iterable<string> {
    const { hierarchy, memories } = this.#circuit;
    for (const { name } of memories) yield name;
    for (let scope = 0; scope < hierarchy.scopeModule.length; scope++) {
      const path = scopePath(hierarchy, scope);
      for (const { name } of signalsOf(hierarchy, scope)) {
        yield path === '' ? name : `${path}.${name}`;
      }
    }
  }

  // Names of scopes and signals may have dots of their own, where a netlist was flattened.
  #within(scope: number, texts: readonly string[]): Binding | undefined {
    for (let length = 1; length < texts.length; length++) {
      const child = this.#child(scope, texts.slice(0, length).join('.'));
      const found = child < 0 ? undefined : this.#within(child, texts.slice(length));
      if (found !== undefined) return found;
    }
    const name = texts.join('.');
    return this.#held(scope, name) ?? this.#signal(scope, name);
  }

  #child(parent: number, name: string): number {
    const { scopeParent, scopeNames } = this.#circuit.hierarchy;
    for (let scope = 1; scope < scopeParent.length; scope++) {
      if (scopeParent[scope] === parent && scopeNames.at(scope) === name) return scope;
    }
    return -1;
  }

  #signal(scope: number, name: string): Binding | undefined {
    const words: Word[] = [];
    for (const signal of signalsOf(this.#circuit.hierarchy, scope)) {
      if (signal.name === name) return this.#signalBinding(scope, signal);
      if (!signal.name.startsWith(`${name}[`)) continue;
      const indices = indicesIn(signal.name.slice(name.length));
      if (indices !== undefined) words.push({ indices, signal });
    }
    return words.length === 0 ? undefined : this.#wordsBinding(scope, words);
  }

  #signalBinding(scope: number, signal: Signal): SignalBinding {
    const { msb, lsb, isVector, isSigned } = signal;
    return {
      ...{ kind: 'signal', name: 0, msb, lsb, isVector, isVariable: false },
      signed: isSigned ?? false,
      nets: this.#nets(scope, signal),
    };
  }

  #nets(scope: number, { offset, width }: Signal) {
    const { scopeStart, netOf } = this.#circuit.hierarchy;
    const start = scopeStart[scope]! + offset;
    return Array.from(netOf.subarray(start, start + width), netId);
  }

  // Words of an array that is built from registers, or the bits of a vector in a flattened netlist.
  #wordsBinding(scope: number, words: readonly Word[]): Binding | undefined {
    const [{ signal, indices: first }] = words as readonly [Word, ...Word[]];
    const isAlike = words.every(
      ({ indices, signal: { msb, lsb } }) =>
        indices.length === first.length && msb === signal.msb && lsb === signal.lsb,
    );
    if (!isAlike) return undefined;
    const ranges = first.map((_, place): IndexRange => {
      const values = words.map(({ indices }) => indices[place]!);
      return {
        low: values.reduce((a, b) => Math.min(a, b)),
        high: values.reduce((a, b) => Math.max(a, b)),
      };
    });
    const count = ranges.reduce((product, { low, high }) => product * (high - low + 1), 1);
    if (count !== words.length) return undefined;
    const nets: (readonly ReturnType<typeof netId>[])[] = new Array(count);
    for (const { indices, signal: each } of words) {
      const place = indices.reduce(
        (sum, index, i) => sum * (ranges[i]!.high - ranges[i]!.low + 1) + index - ranges[i]!.low,
        0,
      );
      nets[place] = this.#nets(scope, each);
    }
    const { msb, lsb, isVector, isSigned: signed = false } = signal;
    const [range] = ranges;
    if (!isVector && ranges.length === 1) {
      const { high, low } = range!;
      return {
        ...{ kind: 'signal', name: 0, msb: high, lsb: low, isVector: true, signed: false },
        ...{ isVariable: false, nets: nets.flat() },
      };
    }
    return {
      ...{ kind: 'memory', name: 0, msb, lsb, signed, isVariable: false },
      ...{ indices: ranges, words: nets },
    };
  }

  #held(scope: number, name: string): MemoryBinding | undefined {
    const { memories, hierarchy } = this.#circuit;
    const path = scopePath(hierarchy, scope);
    const full = path === '' ? name : `${path}.${name}`;
    const number = memories.findIndex((memory) => memory.name === full);
    const memory = memories[number];
    if (memory === undefined) return undefined;
    const { width, depth, indices, word } = memory;
    return {
      ...{ kind: 'memory', name: 0, isVariable: false, words: [] },
      msb: word?.msb ?? width - 1,
      lsb: word?.lsb ?? 0,
      signed: word?.isSigned ?? false,
      indices: indices.map(({ low, size }) => ({ low, high: low + size - 1 })),
      // Nobody asks for the contents: they are for what is worked out at power-up.
      held: { number, indices, contents: new InitialContents(width, depth), position: 0 },
    };
  }
}

/** A word of an array among the signals of a scope. */
interface Word {
  readonly indices: readonly number[];
  readonly signal: Signal;
}

const signalsOf = ({ modules, scopeModule }: Hierarchy, scope: number): Iterable<Signal> =>
  modules[scopeModule[scope]!]!.signals;

/** The numbers in `[3][0]`; undefined for other texts. */
function indicesIn(text: string): number[] | undefined {
  if (!/^(\[-?\d+\])+$/.test(text)) return undefined;
  return Array.from(text.matchAll(/-?\d+/g), ([digits]) => Number(digits));
}
