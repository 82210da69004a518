import { type NetId, netId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { Bits, Logic } from './logic.js';
import { selectFrom } from './tables.js';

/** What was assigned to one bit: a value, and the condition under which it was. */
export interface Entry {
  readonly value: NetId;
  readonly assigned: NetId;
}

/** Bits and what was assigned to them. */
export type Changes = Map<NetId, Entry>;

/** What a stretch of statements assigned, blocking (`now`) and non-blocking (`later`). */
export interface Branch {
  readonly now: Changes;
  readonly later: Changes;
}

/** How a store treats what lies outside the process it serves. */
export interface StoreOptions {
  /** Value of a variable or net before the process assigns it; the net itself by default. */
  readonly outside?: (net: NetId) => NetId;
  /** Whether an unassigned variable keeps its value in a register, so that own values are free. */
  readonly clocked?: boolean;
  /** Where bits were assigned, shared with other runs of the same process. */
  readonly places?: Map<NetId, Position>;
}

const emptyBranch = (): Branch => ({ now: new Map(), later: new Map() });

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
  readonly #layers: Branch[] = [emptyBranch()];
  readonly #ordinary = new Set<NetId>();
  #nextLocal = -1;

  constructor(logic: Logic, options: StoreOptions = {}) {
    this.logic = logic;
    this.#options = options;
    this.places = options.places ?? new Map();
  }

  /** Forgets everything, for another expression. */
  clear(): void {
    this.#layers.length = 1;
    this.#top.now.clear();
    this.#top.later.clear();
    this.reads.clear();
    this.places.clear();
    this.loopIndexes.clear();
    this.#ordinary.clear();
    this.aborted = false;
  }

  /** A new bit of a local variable. */
  local(): NetId {
    return netId(this.#nextLocal--);
  }

  /** Drops the values of all locals made since `first` was the next, when their call has ended. */
  forgetFrom(first: NetId): void {
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

  /** The value a bit has when the process assigns it nothing. */
  own(key: NetId): NetId {
    if (key < 0) return this.logic.unknown;
    this.reads.add(key);
    return this.#options.outside?.(key) ?? key;
  }

  /** The value of a bit after an assignment that may have been made or not. */
  resolve(key: NetId, entry: Entry): NetId {
    if (this.logic.valueOf(entry.assigned) === 1) return entry.value;
    return this.logic.mux(entry.assigned, this.own(key), entry.value);
  }

  /** Assigns a bit where `when` is 1. */
  write(key: NetId, value: NetId, when: NetId, write: WriteMode): void {
    this.places.set(key, write.place);
    if (write.isLoopIndex && !this.#ordinary.has(key)) this.loopIndexes.add(key);
    else {
      this.#ordinary.add(key);
      this.loopIndexes.delete(key);
    }
    const kind = write.blocking ? 'now' : 'later';
    const { one } = this.logic;
    const entry = { value, assigned: one };
    const result = when === one ? entry : this.#choose(key, when, entry, this.#find(key, kind));
    this.#top[kind].set(key, result);
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
  }

  /** One branch out of two: the first where `condition` is 1. Undefined stands for an empty one. */
  merge(condition: NetId, whenTrue: Branch | undefined, whenFalse: Branch | undefined): Branch {
    return this.#combined([whenTrue, whenFalse], (key, [one, zero]) =>
      this.#choose(key, condition, one, zero),
    );
  }

  /** One branch out of a table: entry i where `select` has the value i. */
  mergeTable(select: Bits, table: readonly (Branch | undefined)[]): Branch {
    const branches = [...new Set(table)];
    const index = table.map((branch) => branches.indexOf(branch));
    return this.#combined(branches, (_, entries) => {
      const picked = index.map((i) => entries[i]);
      return {
        value: selectFrom(select, (i) => picked[i]?.value, this.logic)!,
        assigned: selectFrom(select, (i) => picked[i]?.assigned ?? this.logic.zero, this.logic)!,
      };
    });
  }

  /** All assignments of the process, non-blocking ones over blocking ones of the same bit. */
  finish(): Changes {
    const { now, later } = this.#top;
    const changes = new Map(now);
    for (const [key, entry] of later) {
      const before = now.get(key);
      changes.set(key, before === undefined ? entry : this.#over(entry, before));
    }
    return changes;
  }

  get #top(): Branch {
    return this.#layers[this.#layers.length - 1]!;
  }

  #find(key: NetId, kind: keyof Branch): Entry | undefined {
    for (let i = this.#layers.length - 1; i >= 0; i--) {
      const entry = this.#layers[i]![kind].get(key);
      if (entry !== undefined) return entry;
    }
    return undefined;
  }

  #combined(
    branches: readonly (Branch | undefined)[],
    combine: (key: NetId, entries: readonly (Entry | undefined)[]) => Entry,
  ): Branch {
    const result = emptyBranch();
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
      return { value: one!.value, assigned: logic.and(condition, one!.assigned) };
    }
    if (one === undefined) {
      return { value: zero.value, assigned: logic.and(logic.not(condition), zero.assigned) };
    }
    const always = (entry: Entry): boolean => logic.valueOf(entry.assigned) === 1;
    // With the register's own value at hand, a complete branch beside an incomplete one makes the
    // result complete, which takes fewer gates than a condition beside the value.
    if (this.#options.clocked && key >= 0 && always(one) !== always(zero)) {
      const value = logic.mux(condition, this.resolve(key, zero), this.resolve(key, one));
      return { value, assigned: logic.one };
    }
    return {
      value: logic.mux(condition, zero.value, one.value),
      assigned: logic.mux(condition, zero.assigned, one.assigned),
    };
  }

  #over(entry: Entry, before: Entry): Entry {
    return {
      value: this.logic.mux(entry.assigned, before.value, entry.value),
      assigned: this.logic.or(entry.assigned, before.assigned),
    };
  }
}

/** How an assignment is made. */
export interface WriteMode {
  readonly blocking: boolean;
  readonly place: Position;
  readonly isLoopIndex: boolean;
}
