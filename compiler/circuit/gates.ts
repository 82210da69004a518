/**
 * What drives a net. One number per net in `Circuit.kind`; `gateTable` tells all about a kind.
 */
export const GateKind = {
  /** Constant 0. */
  Zero: 0,
  /** Constant 1. */
  One: 1,
  /** Constant x: also what a net without driver is. Two-valued engines read it as 0. */
  Unknown: 2,
  /** Bit of an input port, set from outside. */
  Input: 3,
  /** Output of an edge-triggered register, see `Registers`. */
  Register: 4,
  /** Output of a level-sensitive latch, see `Latches`. */
  Latch: 5,
  Buf: 6,
  Not: 7,
  And: 8,
  Nand: 9,
  Or: 10,
  Nor: 11,
  Xor: 12,
  Xnor: 13,
  /** Two-way multiplexer: fan-in is (select, value for 0, value for 1). */
  Mux: 14,
  /** Bit of a word that a memory port reads, see `Memory`; its fan-in is the port's address. */
  MemoryRead: 15,
  /**
   * Whether two nets have the same value, x as a value of its own (the operator === of IEEE 1364).
   * No part of a circuit can tell: only what looks at one has such gates, and nothing reads these.
   */
  CaseEqual: 16,
} as const;

/** One of the numbers in the table `GateKind`. */
export type GateKind = (typeof GateKind)[keyof typeof GateKind];

/** All that the rest of the compiler needs to know about one kind of driver. */
export interface GateInfo {
  readonly name: string;
  /**
   * `gate`: a function of its fan-in; `memory`: of its fan-in and of what a memory holds;
   * `constant`; `source`: its value comes from elsewhere.
   */
  readonly role: 'constant' | 'source' | 'gate' | 'memory';
  /** Smallest and largest number of fan-in nets. */
  readonly minFanin: number;
  readonly maxFanin: number;
  /**
   * For kinds that fold a two-input operation over the fan-in: the operation, and whether the
   * result is inverted. Absent for the multiplexer, reading and kinds that are no gates.
   */
  readonly fold?: { readonly operation: 'and' | 'or' | 'xor'; readonly inverted: boolean };
}

const UNBOUNDED = 0x7fffffff;

const constant = (name: string): GateInfo => ({ name, role: 'constant', minFanin: 0, maxFanin: 0 });
const source = (name: string): GateInfo => ({ name, role: 'source', minFanin: 0, maxFanin: 0 });
const folding = (
  name: string,
  operation: 'and' | 'or' | 'xor',
  inverted: boolean,
  maxFanin = UNBOUNDED,
): GateInfo => ({ name, role: 'gate', minFanin: 1, maxFanin, fold: { operation, inverted } });

/** The gate kinds, one row each, indexed by `GateKind`. Gate names are those of IEEE 1364. */
export const gateTable: Readonly<Record<GateKind, GateInfo>> = {
  [GateKind.Zero]: constant('zero'),
  [GateKind.One]: constant('one'),
  [GateKind.Unknown]: constant('unknown'),
  [GateKind.Input]: source('input'),
  [GateKind.Register]: source('register'),
  [GateKind.Latch]: source('latch'),
  [GateKind.Buf]: folding('buf', 'and', false, 1),
  [GateKind.Not]: folding('not', 'and', true, 1),
  [GateKind.And]: folding('and', 'and', false),
  [GateKind.Nand]: folding('nand', 'and', true),
  [GateKind.Or]: folding('or', 'or', false),
  [GateKind.Nor]: folding('nor', 'or', true),
  [GateKind.Xor]: folding('xor', 'xor', false),
  [GateKind.Xnor]: folding('xnor', 'xor', true),
  [GateKind.Mux]: { name: 'mux', role: 'gate', minFanin: 3, maxFanin: 3 },
  // With two values it is as good as an xnor.
  [GateKind.CaseEqual]: {
    ...{ name: 'caseEqual', role: 'gate', minFanin: 2, maxFanin: 2 },
    fold: { operation: 'xor', inverted: true },
  },
  [GateKind.MemoryRead]: { name: 'memoryRead', role: 'memory', minFanin: 1, maxFanin: UNBOUNDED },
};

/**
 * Whether a kind computes its net from other nets (as against constants and sources): gates, and
 * what memory ports read.
 */
export const isGate = (kind: number): boolean => kind >= GateKind.Buf;

/** The table row of a kind read from a typed array. */
export const gateInfo = (kind: number): GateInfo => gateTable[kind as GateKind];
