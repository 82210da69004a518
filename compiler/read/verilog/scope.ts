import type { LatchPins, RegisterPins } from '../../circuit/builder.js';
import type { GateKind } from '../../circuit/gates.js';
import type { NetId } from '../../circuit/ids.js';
import type { MemoryIndex } from '../../circuit/memory.js';
import type { WritePins } from '../../circuit/memoryTable.js';
import type { Diagnostics } from '../../diagnostics/diagnostics.js';
import type { Source } from '../../diagnostics/source.js';
import type { Position, SourceMap } from '../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../names.js';
import type { Budget } from './budget.js';
import type { Contents } from './initialContents.js';
import type { RoutineItem } from './syntax.js';

/** A constant of known width: bits in `value`, x and z bits set in `unknown`. */
export interface Constant {
  readonly width: number;
  readonly signed: boolean;
  /** 0 ≤ value < 2^width, also for signed constants (two's complement). */
  readonly value: bigint;
  readonly unknown: bigint;
  /** The real number of which the bits are the rounded value. */
  readonly real?: number;
}

/** What a name means inside one instance of a module. */
export type Binding =
  | SignalBinding
  | MemoryBinding
  | ParameterBinding
  | { readonly kind: 'routine'; readonly syntax: RoutineItem; readonly scope: Scope };

/** A parameter; its bits have the numbers of its declared range, else of `[width-1:0]`. */
export interface ParameterBinding {
  readonly kind: 'parameter';
  readonly value: Constant;
  readonly msb: number;
  readonly lsb: number;
}

/** A net or variable with its nets; `nets[0]` is the rightmost bit. */
export interface SignalBinding {
  readonly kind: 'signal';
  readonly name: NameId;
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
  readonly signed: boolean;
  /** Declared `reg`, `integer` or `time`: assigned by `always` and `initial`. */
  readonly isVariable: boolean;
  readonly nets: readonly NetId[];
}

/** Lowest and highest value of an index of an array. */
export interface IndexRange {
  readonly low: number;
  readonly high: number;
}

/** An array of words: `reg [7:0] m [0:15]`, or of nets. */
export interface MemoryBinding {
  readonly kind: 'memory';
  readonly name: NameId;
  readonly msb: number;
  readonly lsb: number;
  readonly signed: boolean;
  /** As in `SignalBinding`. */
  readonly isVariable: boolean;
  /** Outermost first; the last one counts fastest in the order of the words. */
  readonly indices: readonly IndexRange[];
  /** The nets of each word; empty where the words are held as a memory. */
  readonly words: readonly (readonly NetId[])[];
  /** What holds the words where they have no nets. */
  readonly held?: HeldMemory;
}

/** An array that is held as a memory of the circuit. */
export interface HeldMemory {
  /** Its number in the sink. */
  readonly number: number;
  /** Bits of each index in an address, as many as for `indices` of the binding. */
  readonly indices: readonly MemoryIndex[];
  readonly contents: Contents;
  /** Where it is declared. */
  readonly position: Position;
  /** Set where it is the memory of another module. */
  readonly isFar?: true;
  /** Whether that module, or one between, writes it at clock edges. */
  readonly isWritten?: boolean;
}

/**
 * What logic is built into: a `CircuitBuilder`, or the recording of one module that is stamped
 * into the circuit for each of its instances.
 *
 * Nets may be used before they are driven. Net ids are of the one sink alone. A net that belongs
 * to a port counts as undriven while only the outside drives it.
 */
export interface GateSink {
  /**
   * Set where gates only look at a circuit of two or three values: x is then exactly what IEEE 1364
   * makes of it, which hardware need not be, and `GateKind.CaseEqual` may be used.
   */
  readonly looksAt?: 'twoValues' | 'threeValues';
  /** Sets the origin of what is built next: index of a source in the map, byte offset in it. */
  at(sourceIndex: number, offset: number): void;
  /** A new net without driver. */
  net(): NetId;
  isDriven(net: NetId): boolean;
  /**
   * The `GateKind` that drives a net so far, or -1. Also -1 for a constant on a declared net: it
   * may get further drivers.
   */
  kindOf(net: NetId): number;
  /** Drives a net by a gate or a constant; a second driver of a net is no error at this place. */
  drive(net: NetId, kind: GateKind, fanin: readonly NetId[]): void;
  /** A new net driven by a gate; one and the same net for each constant is allowed. */
  gate(kind: GateKind, fanin: readonly NetId[]): NetId;
  register(pins: RegisterPins): void;
  latch(pins: LatchPins): void;
  /** The nets of the word of a held memory at an address; one and the same for the same address. */
  readMemory(memory: number, address: readonly NetId[]): readonly NetId[];
  /** Lets a clock edge write to a held memory, after all that was said of it before. */
  writeMemory(memory: number, pins: WritePins): void;
}

/** A bit that may be z: it is `data` while `enable` is 1, and z while that is 0. */
export interface FloatingBit {
  readonly data: NetId;
  readonly enable: NetId;
}

/** What all of one module's elaboration shares. */
export interface Elaboration {
  readonly builder: GateSink;
  readonly names: NameTable;
  readonly sources: SourceMap;
  readonly diagnostics: Diagnostics;
  readonly budget: Budget;
  /** Value given to a net at power-up by `initial`, 0 or 1, collected before registers are made. */
  readonly initialValues: Map<NetId, 0 | 1>;
  /** Whether there are parameters with real values. */
  readonly hasReals?: boolean;
  /** Lets a process drive a bit of a variable, which may be z; absent where no process is built. */
  driveFloating?(net: NetId, bit: FloatingBit): void;
  /** Tells that what drives a bit of a variable next hands on a net as it is, z too. */
  noteCopy?(variable: NetId, net: NetId): void;
  /** Finds a data file named in the source at a position; undefined if there is none. */
  readData?(path: string, from: Position): Source | undefined;
  /**
   * Takes note that a held memory is used as only registers can be, at a place: its module is
   * compiled anew, with the memory built from registers, where that is not too large, and the whole
   * design where the memory is another module's. Returns only if it is too large.
   */
  needRegisters?(memory: HeldMemory): void;
}

/**
 * What a name that is declared, but means nothing where it is used, is: a signal or parameter whose
 * declaration comes after the constants that are worked out, or one whose declaration is faulty.
 */
export type Unusable =
  | 'real'
  | 'event'
  | 'genvar'
  | 'block'
  | 'instance'
  | 'signal'
  | 'later'
  | 'faulty';

/** One instance of a module, or a generate or named block inside one. */
export interface Scope {
  readonly shared: Elaboration;
  /**
   * The meaning of a name seen from here, outer blocks included; undefined if unknown. A path leads
   * into blocks and instances; an element of a generate loop or of an array of instances stands in
   * it under a name of its own, the text `g[2]` with the index in decimal (`names.internText`).
   */
  resolve(path: readonly NameId[]): Binding | undefined;
  /**
   * The net of a name that is a signal of one bit; with an index, of that bit of a vector. -1 where
   * it takes more to tell, or where `drives` asks for a net and it is a variable. Absent where a
   * scope cannot tell.
   */
  netOf?(name: NameId, index: number | undefined, drives: boolean): number;
  /** The value of a real parameter seen from here; undefined for any other name. */
  realOf?(name: NameId): number | undefined;
  /** Why a name does not resolve although it is declared; undefined where it is not. */
  unusable?(name: NameId): Unusable | undefined;
  /** The names that can be used here, for a message about one that cannot. */
  visibleNames?(): Iterable<string>;
  /**
   * The scope of a named block of statements that stands in an `always` or `initial` of this
   * scope, or in another such block; its declarations are made. Undefined if there is none, and
   * absent where a scope cannot have any (a function's).
   */
  block?(name: NameId): Scope | undefined;
}
