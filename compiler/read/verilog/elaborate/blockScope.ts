import { type NetId, netId } from '../../../circuit/ids.js';
import type { DiagnosticCode } from '../../../diagnostics/codes.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type {
  Binding,
  Constant,
  Elaboration,
  HeldMemory,
  IndexRange,
  MemoryBinding,
  ParameterBinding,
  Scope,
  SignalBinding,
  Unusable,
} from '../scope.js';
import type { Item, RoutineItem } from '../syntax.js';
import type { Recording } from './recording.js';
import { Flag, REAL_VALUE, SymbolKind, SymbolTable } from './symbols.js';
import { isFraction, realParameter, unusableName } from './unusableName.js';

/** Width up to which the binding of a signal is made anew each time. */
const NARROW = 4;

const noItems: readonly Item[] = [];

/** What the scopes of a module have in common. */
export interface ScopeHost extends Elaboration {
  readonly builder: Recording;
  readonly moduleName: NameId;
  /** The module itself, and then every block inside it. */
  readonly blocks: readonly BlockScope[];
  /** The meaning of `path[at] …` inside an instance, in nets of this module. */
  bindingInside(instance: number, path: readonly NameId[], at: number): Binding | undefined;
  /** The meaning of a path that begins above the module, in nets of this module. */
  bindingAbove?(path: readonly NameId[]): Binding | undefined;
  report(code: DiagnosticCode, message: string, start: Position, end: Position): void;
}

/** An array of words among the names of a scope. */
export interface ArrayShape {
  /** First net of the first word; the words follow one another. None where they are held. */
  readonly first: NetId;
  readonly indices: readonly IndexRange[];
  /** What holds the words where they have no nets. */
  readonly held?: HeldMemory;
}

/** The indices of each word of an array as they follow its name, `[3][0]`, in order. */
function* indexTexts([range, ...others]: readonly IndexRange[]): Iterable<string> {
  if (range === undefined) {
    yield '';
    return;
  }
  for (let at = range.low; at <= range.high; at++) {
    for (const rest of indexTexts(others)) yield `[${at}]${rest}`;
  }
}

/** A module, or a generate block or named block of statements inside one, and its names. */
export class BlockScope implements Scope {
  readonly shared: ScopeHost;
  readonly parent: BlockScope | undefined;
  /** Index into the module's blocks; 0 is the module itself. */
  readonly index: number;
  readonly name: NameId;
  readonly symbols = new SymbolTable();
  /** Items whose names are being declared, for messages about those that are still unknown. */
  pending: readonly Item[] = noItems;
  // A generate loop makes a hundred thousand scopes with next to nothing in them.
  #constants: Constant[] | undefined;
  #routines: RoutineItem[] | undefined;
  #memories: ArrayShape[] | undefined;
  // Only what is worth keeping: most signals are narrow, and a netlist has a million of them.
  #bindings: Map<number, Binding> | undefined;

  constructor(shared: ScopeHost, parent: BlockScope | undefined, index: number, name: NameId) {
    this.shared = shared;
    this.parent = parent;
    this.index = index;
    this.name = name;
  }

  get constants(): Constant[] {
    this.#constants ??= [];
    return this.#constants;
  }

  get routines(): RoutineItem[] {
    this.#routines ??= [];
    return this.#routines;
  }

  get memories(): ArrayShape[] {
    this.#memories ??= [];
    return this.#memories;
  }

  /** The innermost scope, from this one outwards, that has a name; undefined if none has. */
  owner(name: NameId): BlockScope | undefined {
    for (let scope: BlockScope | undefined = this; scope; scope = scope.parent) {
      if (scope.symbols.find(name) >= 0) return scope;
    }
    return undefined;
  }

  resolve(path: readonly NameId[]): Binding | undefined {
    const owner = this.owner(path[0]!);
    const own = owner?.member(path, 0);
    if (own !== undefined || path.length === 1) return own;
    // A module may name itself at the front of a path.
    const { blocks, moduleName } = this.shared;
    const named = path[0] === moduleName ? blocks[0]!.member(path, 1) : undefined;
    return named ?? this.shared.bindingAbove?.(path);
  }

  netOf(name: NameId, index: number | undefined, drives: boolean): number {
    for (let scope: BlockScope | undefined = this; scope; scope = scope.parent) {
      const symbol = scope.symbols.find(name);
      if (symbol < 0) continue;
      return index === undefined
        ? scope.symbols.scalarAt(symbol, drives)
        : scope.symbols.bitAt(symbol, index, drives);
    }
    return -1;
  }

  realOf(name: NameId): number | undefined {
    const owner = this.owner(name);
    const symbol = owner?.symbols.find(name) ?? -1;
    return owner === undefined ? undefined : realParameter(owner, symbol);
  }

  block(name: NameId): BlockScope | undefined {
    const symbol = this.symbols.find(name);
    if (symbol < 0 || this.symbols.kind(symbol) !== SymbolKind.Block) return undefined;
    return this.shared.blocks[this.symbols.value(symbol)];
  }

  *visibleNames(): Iterable<string> {
    for (let scope: BlockScope | undefined = this; scope; scope = scope.parent) {
      for (const name of scope.symbols.names()) yield this.shared.names.text(name);
    }
  }

  unusable(name: NameId): Unusable | undefined {
    for (let scope: BlockScope | undefined = this; scope; scope = scope.parent) {
      const reason = unusableName(scope, name);
      if (reason !== undefined) return reason;
    }
    return undefined;
  }

  /** The meaning of `path[at] …` as a path that begins with a name of this very scope. */
  member(path: readonly NameId[], at: number): Binding | undefined {
    const symbol = this.symbols.find(path[at]!);
    if (symbol < 0) return undefined;
    if (at === path.length - 1) return this.#binding(symbol);
    const kind = this.symbols.kind(symbol);
    if (kind === SymbolKind.Block) return this.block(path[at]!)!.member(path, at + 1);
    if (kind === SymbolKind.Instance) {
      return this.shared.bindingInside(this.symbols.value(symbol), path, at + 1);
    }
    return undefined;
  }

  /**
   * The vectors that a symbol stands for: a signal, or each word of an array, with the index that
   * follows its name in a text. None for what has no nets.
   */
  *vectors(symbol: number): Iterable<{ readonly first: number; readonly index: string }> {
    const { symbols } = this;
    const kind = symbols.kind(symbol);
    const value = symbols.value(symbol);
    if (kind === SymbolKind.Signal) yield { first: value, index: '' };
    if (kind !== SymbolKind.Memory) return;
    const { first, indices, held } = this.memories[value]!;
    if (held !== undefined) return;
    const width = symbols.width(symbol);
    let word = first as number;
    for (const index of indexTexts(indices)) {
      yield { first: word, index };
      word += width;
    }
  }

  #binding(symbol: number): Binding | undefined {
    const known = this.#bindings?.get(symbol);
    if (known !== undefined) return known;
    const made = this.#makeBinding(symbol);
    const isNarrow = made?.kind === 'signal' && made.nets.length <= NARROW;
    if (made !== undefined && !isNarrow) {
      this.#bindings ??= new Map();
      this.#bindings.set(symbol, made);
    }
    return made;
  }

  #makeBinding(symbol: number): Binding | undefined {
    const value = this.symbols.value(symbol);
    switch (this.symbols.kind(symbol)) {
      case SymbolKind.Signal:
        return this.#signal(symbol);
      case SymbolKind.Memory:
        return this.#memory(symbol);
      case SymbolKind.Parameter:
        return value >= REAL_VALUE || isFraction(realParameter(this, symbol))
          ? undefined
          : this.#parameter(symbol);
      case SymbolKind.Routine:
        return { kind: 'routine', syntax: this.routines[value]!, scope: this };
      default:
        return undefined;
    }
  }

  #parameter(symbol: number): ParameterBinding {
    const { symbols } = this;
    const value = this.constants[symbols.value(symbol)]!;
    return { kind: 'parameter', value, msb: symbols.msb(symbol), lsb: symbols.lsb(symbol) };
  }

  #signal(symbol: number): SignalBinding {
    const { symbols } = this;
    const flags = symbols.flags(symbol);
    return {
      kind: 'signal',
      name: symbols.name(symbol),
      msb: symbols.msb(symbol),
      lsb: symbols.lsb(symbol),
      isVector: (flags & Flag.Vector) !== 0,
      signed: (flags & Flag.Signed) !== 0,
      isVariable: (flags & Flag.Variable) !== 0,
      nets: consecutive(symbols.value(symbol), symbols.width(symbol)),
    };
  }

  #memory(symbol: number): MemoryBinding {
    const { symbols } = this;
    const flags = symbols.flags(symbol);
    const width = symbols.width(symbol);
    const { first, indices, held } = this.memories[symbols.value(symbol)]!;
    const words: NetId[][] = [];
    for (let word = 0; held === undefined && word < wordsOf(indices); word++) {
      words.push(consecutive(first + word * width, width));
    }
    return {
      kind: 'memory',
      name: symbols.name(symbol),
      msb: symbols.msb(symbol),
      lsb: symbols.lsb(symbol),
      signed: (flags & Flag.Signed) !== 0,
      isVariable: (flags & Flag.Variable) !== 0,
      indices,
      words,
      ...(held !== undefined && { held }),
    };
  }
}

/** Number of words that indices tell apart. */
export const wordsOf = (indices: readonly IndexRange[]): number =>
  indices.reduce((product, { low, high }) => product * (high - low + 1), 1);

function consecutive(first: number, count: number): NetId[] {
  const nets = [netId(first)];
  for (let i = 1; i < count; i++) nets.push(netId(first + i));
  return nets;
}
