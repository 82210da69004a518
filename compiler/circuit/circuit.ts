import type { Source } from '../diagnostics/source.js';
import type { Hierarchy } from './hierarchy.js';
import type { Memory } from './memory.js';
import type { Tables } from './tables/tableColumns.js';

/** A port of the top module. `nets[0]` is its rightmost (least significant) bit. */
export interface Port {
  readonly name: string;
  /** Declared left and right index; both 0 for a scalar. */
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
  readonly nets: Uint32Array;
}

/** Which edge of its clock pin a register captures on. */
export const Edge = { Rising: 0, Falling: 1 } as const;

/** What the output is while set and reset are both active. */
export const Priority = { ResetWins: 0, SetWins: 1, Unknown: 2 } as const;

/**
 * Edge-triggered registers, one entry of each array per register.
 *
 * `set` and `reset` are asynchronous and active at 1 (readers insert an inverter for an active-low
 * pin); `NO_NET` where absent. Enables, synchronous set and reset, scan and toggle are logic in
 * front of `data`.
 */
export interface Registers {
  readonly count: number;
  readonly output: Uint32Array;
  readonly clock: Uint32Array;
  /** An `Edge`. */
  readonly edge: Uint8Array;
  readonly data: Uint32Array;
  readonly set: Uint32Array;
  readonly reset: Uint32Array;
  /** A `Priority`. */
  readonly priority: Uint8Array;
  /** The value the netlist itself gives at power-up: 0, 1, or 2 where it gives none. */
  readonly initial: Uint8Array;
}

/**
 * Level-sensitive latches: transparent while `enable` is 1, otherwise they keep their value.
 *
 * `set`, `reset` and `priority` as in `Registers`. A latch of set and reset alone has `NO_NET` as
 * enable and data.
 */
export interface Latches {
  readonly count: number;
  readonly output: Uint32Array;
  readonly enable: Uint32Array;
  readonly data: Uint32Array;
  readonly set: Uint32Array;
  readonly reset: Uint32Array;
  readonly priority: Uint8Array;
  readonly initial: Uint8Array;
}

/** What the text calls values of a signal by names of constants: the states of a machine, mostly. */
export interface ValueNames {
  /** The signal's nets, least significant first. */
  readonly nets: Uint32Array;
  readonly names: ReadonlyMap<number, string>;
}

/**
 * A net that is 1 while a bus has no value of its own: several drivers give it different values
 * (`conflict`), or none drives it though it is read and nothing pulls it or keeps its value
 * (`float`). The bus is x then, or what a two-valued engine reads x as.
 */
export interface BusCheck {
  readonly kind: 'conflict' | 'float';
  readonly when: number;
  /** The bus, and its hierarchical name, `net 17` where it has none. */
  readonly net: number;
  readonly name: string;
  /** Index into `sources`, and byte offset, of one of its drivers. */
  readonly sourceIndex: number;
  readonly offset: number;
}

/**
 * A flat netlist: numbered nets with one driver each, in typed arrays.
 *
 * Made by `CircuitBuilder.finish()` only. The fan-in of net n is
 * `fanin[faninStart[n]] … fanin[faninStart[n + 1] - 1]`.
 */
export interface Circuit {
  /** Name of the top module. */
  readonly name: string;
  readonly netCount: number;
  /** A `GateKind` per net. */
  readonly kind: Uint8Array;
  /** netCount + 1 entries. */
  readonly faninStart: Uint32Array;
  readonly fanin: Uint32Array;
  /** In declaration order, clock ports included. */
  readonly inputs: readonly Port[];
  readonly outputs: readonly Port[];
  readonly registers: Registers;
  readonly latches: Latches;
  /** Words that are held as a memory; small memories may be registers instead. */
  readonly memories: readonly Memory[];
  /** Cells that are told by a table, exactly, where two or three values need it. */
  readonly tables: Tables;
  readonly hierarchy: Hierarchy;
  /** Absent where values of no signal have names. */
  readonly valueNames?: readonly ValueNames[];
  /** One or two for each bus whose drivers can disagree or be off; empty without buses. */
  readonly checks: readonly BusCheck[];
  readonly sources: readonly Source[];
  /** Per net: index into `sources` of the file of its driver. */
  readonly originSource: Uint16Array;
  /** Per net: byte offset of its driver's text in that file. */
  readonly originOffset: Uint32Array;
}
