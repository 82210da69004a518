import { type NetId, netId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { FloatingBit, HeldMemory } from '../scope.js';
import { type Entry, eitherEntry, overEntry, tableEntry } from './entries.js';
import { chosenBit, operandOf } from './floatingBits.js';
import { KnownWords } from './knownWords.js';
import type { Bits, Logic } from './logic.js';
import { eitherWrites, tableWrites, type WordWrite } from './wordWrites.js';

/** Bits and what was assigned to them. */
export type Changes = Map<NetId, Entry>;

/** What a stretch of statements assigned, blocking (`now`) and non-blocking (`later`). */
export interface Branch {
  readonly now: Changes;
  readonly later: Changes;
  /** Words of held memories written likewise, in order. */
  readonly nowWords: readonly WordWrite[];
  readonly laterWords: readonly WordWrite[];
}

/** How a store treats what lies outside the process it serves. */
export interface StoreOptions {
  /** Value of a variable or net before the process assigns it; the net itself by default. */
  readonly outside?: (net: NetId) => NetId;
  /** Whether an unassigned variable keeps its value in a register, so that own values are free. */
  readonly clocked?: boolean;
  /**
   * Variables whose register is not all that tells their value: those assigned z, or in both ways.
   * `clocked` does not hold for them.
   */
  readonly composed?: ReadonlySet<NetId>;
  /** Where bits were assigned, shared with other runs of the same process. */
  readonly places?: Map<NetId, Position>;
}

interface OpenBranch extends Branch {
  nowWords: readonly WordWrite[];
  laterWords: readonly WordWrite[];
}

const noWords: readonly WordWrite[] = [];

const emptyBranch = (): OpenBranch => ({
  now: new Map(),
  later: new Map(),
  nowWords: noWords,
  laterWords: noWords,
});

/**
 * The values of variables while a process is executed symbolically.
 *
 * A bit of a variable is known by its net; bits of a routine's locals have negative ids and start
 * as x. Branches are executed in layers: `enter`, execute, `leave`, then `merge`. A condition that
 * is x selects as a multiplexer does, as the conditional operator of clause 5.1.13: the result is
 * known where both branches agree. (IEEE 1364 simulation would take the else branch.)
 */
export class Store {
  readonly logic: Logic;
  /** Bits read before the process assigned them. */
  readonly reads = new Set<NetId>();
  /** Where each bit was assigned last in the text executed. */
  readonly places: Map<NetId, Position>;
  /** Bits assigned by the first and third part of `for` alone. */
  readonly loopIndexes = new Set<NetId>();
  /** Set once a call or loop has gone too far, so that nothing further is unrolled. */
  aborted = false;
  readonly #options: StoreOptions;
  readonly #layers: OpenBranch[] = [emptyBranch()];
  readonly #ordinary = new Set<NetId>();
  readonly #constants: Entry[] = [];
  /** Variables assigned a number, outside of any branch; they go before `#layers`. */
  readonly #words = new KnownWords();
  #nextLocal = -1;
  /** Whether anything assigned may be z. */
  #floats = false;

  constructor(logic: Logic, options: StoreOptions = {}) {
    this.logic = logic;
    this.#options = options;
    this.places = options.places ?? new Map();
  }

  /** Forgets everything, for another expression. */
  clear(): void {
    this.#words.clear();
    this.#layers.length = 1;
    if (this.#top.now.size > 0) this.#top.now.clear();
    if (this.#top.later.size > 0) this.#top.later.clear();
    this.#top.nowWords = noWords;
    this.#top.laterWords = noWords;
    // Clearing costs something even where there is nothing, which is nearly always so.
    for (const set of [this.reads, this.places, this.loopIndexes, this.#ordinary]) {
      if (set.size > 0) set.clear();
    }
    this.aborted = false;
    this.#floats = false;
  }

  /** A new bit of a local variable. */
  local(): NetId {
    return netId(this.#nextLocal--);
  }

  /** Drops the values of all locals made since `first` was the next, when their call has ended. */
  forgetFrom(first: NetId): void {
    for (const word of this.#words.all()) if (word.keys[0]! <= first) this.#words.delete(word);
    const { now, later } = this.#top;
    for (let key = first as number; key > this.#nextLocal; key--) {
      now.delete(netId(key));
      later.delete(netId(key));
    }
  }

  /** The bit a call to `local` would make next; for `forgetFrom`. */
  get nextLocal(): NetId {
    return netId(this.#nextLocal);
  }

  /** The value of a bit as blocking assignments have left it. */
  read(key: NetId): NetId {
    const entry = this.#find(key, 'now');
    return entry === undefined ? this.own(key) : this.resolve(key, entry);
  }

  /** Whether anything assigned so far may be z. */
  get mayFloatAtAll(): boolean {
    return this.#floats;
  }

  /** Whether a bit may be z as blocking assignments have left it. */
  mayFloat(key: NetId): boolean {
    return this.#floats && this.#find(key, 'now')?.driven !== undefined;
  }

  /** As `read`, with z apart from the value. */
  readFloating(key: NetId): FloatingBit {
    const { one } = this.logic;
    const entry = this.#floats ? this.#find(key, 'now') : undefined;
    if (entry?.driven === undefined) return { data: this.read(key), enable: one };
    const before = { data: this.own(key), enable: one };
    const bit = { data: entry.value, enable: entry.driven };
    return chosenBit(entry.assigned, before, bit, this.logic);
  }

  /** The value a bit has when the process assigns it nothing. */
  own(key: NetId): NetId {
    if (key < 0) return this.logic.unknown;
    this.reads.add(key);
    return this.#options.outside?.(key) ?? key;
  }

  /** The value of a bit after an assignment that may have been made or not. */
  resolve(key: NetId, entry: Entry): NetId {
    const { value, assigned, driven } = entry;
    const bit =
      driven === undefined ? value : operandOf({ data: value, enable: driven }, this.logic);
    if (this.logic.valueOf(assigned) === 1) return bit;
    return this.logic.mux(assigned, this.own(key), bit);
  }

  /** The value of a variable that was assigned a number; undefined where only its bits tell. */
  known(keys: readonly NetId[]): bigint | undefined {
    return this.#words.get(keys)?.value;
  }

  /**
   * Assigns a number below 2^width to a whole variable; false where that has to be done bit by
   * bit.
   */
  writeKnown(keys: readonly NetId[], value: bigint, write: WriteMode): boolean {
    if (!write.blocking || !this.isUnconditional) return false;
    const word = this.#words.get(keys);
    const isOrdinary = !write.isLoopIndex;
    if (word !== undefined) {
      word.value = value;
      word.isOrdinary ||= isOrdinary;
      return true;
    }
    for (const key of keys) {
      this.#spread(key);
      if (key >= 0) this.places.set(key, write.place);
    }
    this.#words.add({ keys, value, isOrdinary });
    return true;
  }

  /** Lets the word that a bit belongs to, if any, be known by its bits. */
  #spread(key: NetId): void {
    const word = this.#words.isEmpty ? undefined : this.#words.ofBit(key);
    if (word === undefined) return;
    this.#words.delete(word);
    const { now } = this.#layers[0]!;
    for (const [i, bit] of word.keys.entries()) {
      now.set(bit, this.#entry(this.logic.constant((word.value >> BigInt(i)) & 1n ? 1 : 0)));
      if (bit < 0) continue;
      const place = this.places.get(bit)!;
      this.#note(bit, { blocking: true, place, isLoopIndex: !word.isOrdinary });
    }
  }

  /** Assigns a bit where `when` is 1; it becomes z where `driven`, if given, is 0. */
  write(key: NetId, value: NetId, when: NetId, write: WriteMode, driven = this.logic.one): void {
    this.#spread(key);
    if (key >= 0) this.#note(key, write);
    const kind = write.blocking ? 'now' : 'later';
    const made = this.#entry(value, driven);
    const entry = write.isCopy ? { ...made, isCopy: write.isCopy } : made;
    const isSure = when === this.logic.one;
    const result = isSure ? entry : this.#choose(key, when, entry, this.#find(key, kind));
    this.#top[kind].set(key, result);
  }

  // What tells of a routine's locals ends with the call, so that nobody asks where they are assigned.
  #note(key: NetId, write: WriteMode): void {
    this.places.set(key, write.place);
    if (write.isLoopIndex && !this.#ordinary.has(key)) this.loopIndexes.add(key);
    else {
      this.#ordinary.add(key);
      this.loopIndexes.delete(key);
    }
  }

  /** The entry of an assignment that is surely made: the same one for the same constant. */
  #entry(value: NetId, driven = this.logic.one): Entry {
    const { logic } = this;
    const assigned = logic.one;
    if (driven !== assigned) {
      this.#floats = true;
      return { value, assigned, driven };
    }
    const constant = value === assigned ? 1 : value === logic.zero ? 0 : -1;
    if (constant < 0) return { value, assigned };
    this.#constants[constant] ??= { value, assigned };
    return this.#constants[constant];
  }

  /** Writes a word of a held memory. */
  writeWord(write: WordWrite, blocking: boolean): void {
    const kind = blocking ? 'nowWords' : 'laterWords';
    const top = this.#top;
    // The list of an open branch is its own: it grows in place.
    if (top[kind] === noWords) top[kind] = [write];
    else (top[kind] as WordWrite[]).push(write);
  }

  /** The blocking writes to a held memory so far. */
  wordsWritten(memory: HeldMemory): readonly WordWrite[] {
    const own = this.#layers.flatMap(({ nowWords }) => nowWords);
    return own.filter((write) => write.memory === memory);
  }

  /** All writes of the process to held memories, non-blocking ones behind blocking ones. */
  finishWords(): readonly WordWrite[] {
    return [...this.#top.nowWords, ...this.#top.laterWords];
  }

  /** Whether what is executed now happens whatever the conditions are. */
  get isUnconditional(): boolean {
    return this.#layers.length === 1;
  }

  /** Starts a branch. */
  enter(): void {
    this.#layers.push(emptyBranch());
  }

  /** Ends a branch; what it assigned takes effect only by `merge` or `apply`. */
  leave(): Branch {
    return this.#layers.pop()!;
  }

  /** Lets the assignments of a branch take effect. */
  apply(branch: Branch): void {
    for (const [key, entry] of branch.now) this.#top.now.set(key, entry);
    for (const [key, entry] of branch.later) this.#top.later.set(key, entry);
    for (const write of branch.nowWords) this.writeWord(write, true);
    for (const write of branch.laterWords) this.writeWord(write, false);
  }

  /** One branch out of two: the first where `condition` is 1. Undefined stands for an empty one. */
  merge(condition: NetId, whenTrue: Branch | undefined, whenFalse: Branch | undefined): Branch {
    const either = (kind: 'nowWords' | 'laterWords'): readonly WordWrite[] =>
      eitherWrites(
        condition,
        whenTrue?.[kind] ?? noWords,
        whenFalse?.[kind] ?? noWords,
        this.logic,
      );
    const changes = this.#combined([whenTrue, whenFalse], (key, [one, zero]) =>
      this.#choose(key, condition, one, zero),
    );
    return { ...changes, nowWords: either('nowWords'), laterWords: either('laterWords') };
  }

  /** One branch out of a table: entry i where `select` has the value i. */
  mergeTable(select: Bits, table: readonly (Branch | undefined)[]): Branch {
    const branches = [...new Set(table)];
    const index = table.map((branch) => branches.indexOf(branch));
    const words = (kind: 'nowWords' | 'laterWords'): readonly WordWrite[] => {
      const all = branches.map((branch) => branch?.[kind] ?? noWords);
      return tableWrites(select, index, all, this.logic);
    };
    const changes = this.#combined(branches, (_, entries) => {
      const picked = index.map((i) => entries[i]);
      return tableEntry(select, picked, this.logic);
    });
    return { ...changes, nowWords: words('nowWords'), laterWords: words('laterWords') };
  }

  /** All assignments of the process, non-blocking ones over blocking ones of the same bit. */
  finish(): Changes {
    for (const { keys } of this.#words.all()) this.#spread(keys[0]!);
    const { now, later } = this.#top;
    const changes = new Map(now);
    for (const [key, entry] of later) {
      const before = now.get(key);
      changes.set(key, before === undefined ? entry : overEntry(entry, before, this.logic));
    }
    return changes;
  }

  /** The variables that are to be `composed` if the process is executed once more. */
  composedBits(): ReadonlySet<NetId> {
    const { now, later } = this.#top;
    const bits = new Set<NetId>();
    for (const [key, { driven }] of [...now, ...later]) {
      if (key >= 0 && (driven !== undefined || (now.has(key) && later.has(key)))) bits.add(key);
    }
    return bits;
  }

  get #top(): OpenBranch {
    return this.#layers[this.#layers.length - 1]!;
  }

  #find(key: NetId, kind: 'now' | 'later'): Entry | undefined {
    if (kind === 'now') this.#spread(key);
    for (let i = this.#layers.length - 1; i >= 0; i--) {
      const entry = this.#layers[i]![kind].get(key);
      if (entry !== undefined) return entry;
    }
    return undefined;
  }

  #combined(
    branches: readonly (Branch | undefined)[],
    combine: (key: NetId, entries: readonly (Entry | undefined)[]) => Entry,
  ): Pick<Branch, 'now' | 'later'> {
    const result = { now: new Map(), later: new Map() };
    for (const kind of ['now', 'later'] as const) {
      const keys = new Set(branches.flatMap((branch) => [...(branch?.[kind].keys() ?? [])]));
      for (const key of keys) {
        const before = this.#find(key, kind);
        const entries = branches.map((branch) => branch?.[kind].get(key) ?? before);
        result[kind].set(key, combine(key, entries));
      }
    }
    return result;
  }

  #choose(key: NetId, condition: NetId, one: Entry | undefined, zero: Entry | undefined): Entry {
    const { logic } = this;
    if (zero === undefined) {
      return { ...one!, assigned: logic.and(condition, one!.assigned) };
    }
    if (one === undefined) {
      return { ...zero, assigned: logic.and(logic.not(condition), zero.assigned) };
    }
    const always = (entry: Entry): boolean => logic.valueOf(entry.assigned) === 1;
    // With the register's own value at hand, a complete branch beside an incomplete one makes the
    // result complete, which takes fewer gates than a condition beside the value.
    if (this.#mayComplete(key, one, zero) && always(one) !== always(zero)) {
      const value = logic.mux(condition, this.resolve(key, zero), this.resolve(key, one));
      return { value, assigned: logic.one };
    }
    const assigned = logic.mux(condition, zero.assigned, one.assigned);
    return eitherEntry(condition, zero, one, assigned, logic);
  }

  #mayComplete(key: NetId, one: Entry, zero: Entry): boolean {
    if (!this.#options.clocked || key < 0) return false;
    if (one.driven !== undefined || zero.driven !== undefined) return false;
    return this.#options.composed?.has(key) !== true;
  }
}

/** How an assignment is made. */
export interface WriteMode {
  readonly blocking: boolean;
  readonly place: Position;
  readonly isLoopIndex: boolean;
  /** Set where nets are assigned as they are. */
  readonly isCopy?: true | undefined;
}
