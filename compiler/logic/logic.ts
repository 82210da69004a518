import type { Fault } from '../../runtime/engine.js';

/** Operations of a logic graph. */
export const LogicOp = {
  /** The constant 0; node 0 and no other. */
  Zero: 0,
  /** Input bit number `a` of the stimulus row. */
  Input: 1,
  /** State bit number `a`. */
  State: 2,
  And: 3,
  Xor: 4,
  /** `a` selects: `b` where it is 0, `c` where it is 1. */
  Mux: 5,
  /** The whole number 2b + a: `a` is a bit, `b` such a number again, `FALSE` for 0. */
  Pack: 6,
  /**
   * The word of memory number `c` at the address that the number `a` makes (its bits are those of a
   * `ReadPort`, the first one lowest), as the memory was before the cycle. Where there is no such
   * word, or `b` is 0, all its bits are x, or 0 in a two-valued graph.
   */
  Load: 7,
  /**
   * Bit number `c` of the bytes of the word `a`, which are those of `Engine.memoryState`; `b` is
   * `FALSE`.
   */
  Bit: 8,
} as const;

/** A node and whether it is inverted: node * 2 + inverted. */
export type Literal = number;

/** The literals of the two constants. */
export const FALSE: Literal = 0;
export const TRUE: Literal = 1;

export const nodeOf = (literal: Literal): number => literal >>> 1;
export const isInverted = (literal: Literal): boolean => (literal & 1) === 1;

/**
 * One clock cycle as a Boolean function: from input and state bits to output bits and next state.
 *
 * Nodes are numbered so that operands come before their users. Operands `a`, `b`, `c` are literals
 * (for `Input` and `State`, `a` is a plain index). `Pack` and `Load` give no bit: only nodes of
 * their kind read them, and never inverted. The graph knows 0 and 1 only; a three-valued
 * circuit has two bits for each value (see `ThreeValued`).
 */
export interface Logic {
  readonly nodeCount: number;
  readonly op: Uint8Array;
  readonly a: Uint32Array;
  readonly b: Uint32Array;
  readonly c: Uint32Array;
  readonly inputCount: number;
  /** Per output bit, in the order of the packed response row. */
  readonly outputs: readonly Literal[];
  /** Per state bit, its value after the cycle, before the updates are made. */
  readonly next: readonly Literal[];
  readonly states: readonly LogicState[];
  /** What sixteen neighbouring state bits each do in common; none before `groupRegisters`. */
  readonly updates: readonly StateUpdate[];
  /** What is written to memories at the end of the cycle, one after another. */
  readonly writes: readonly LogicWrite[];
  /**
   * Literals that must be 0: where one is 1 the cycle has no result, for the reason beside it.
   */
  readonly faults: readonly LogicFault[];
}

/**
 * A word of a memory that is written: as a `WritePort` does, with all that it reads as of the end.
 *
 * A value that can be x is told as two literals, `…Unknown` and `…Surely` holding the second ones;
 * a two-valued graph has these lists empty, and `surely` equal to `enable`.
 */
export interface LogicWrite {
  /** Number of the memory. */
  readonly memory: number;
  /** Where 0, nothing is written. */
  readonly enable: Literal;
  /** Where 0, what is written leaves x where it differs. */
  readonly surely: Literal;
  /** As in `ReadPort`; 0 for a bit that is x. */
  readonly address: readonly Literal[];
  /** 1 for a bit that is x. */
  readonly addressUnknown: readonly Literal[];
  /** 0 for a bit that is x. */
  readonly data: readonly Literal[];
  readonly dataUnknown: readonly Literal[];
  /** Per bit of the word: 0 where it is not written. Empty where all are. */
  readonly mask: readonly Literal[];
  /** Per bit of the word: 0 where it may be written or not. Empty where `mask` is. */
  readonly maskSurely: readonly Literal[];
}

/** A condition under which a cycle has no result, and why. */
export interface LogicFault extends Fault {
  readonly when: Literal;
}

/** How many neighbouring state bits one update takes: the bytes of a 128-bit vector. */
export const UPDATE_WIDTH = 16;

/**
 * A step that sixteen neighbouring state bits take together: of bit i of them the value after the
 * cycle is `gate & (enable ? next[first + i] : old)`.
 */
export interface StateUpdate {
  /** First of the state bits. */
  readonly first: number;
  /** Where 0, the bits keep their values. `TRUE` where there is no such condition. */
  readonly enable: Literal;
  /** Where 0, the bits become 0. `TRUE` where there is no such condition. */
  readonly gate: Literal;
  /** `next` of the bits is state bits from this one on, in order; -1 if it is not. */
  readonly from: number;
}

/** What a state bit holds, so that every engine can load and show the same state. */
export interface LogicState {
  /**
   * `value`: the bit of a state element of a two-valued circuit, or whether it may be 1 in a
   * three-valued one; `zero`: whether it may be 0; `input` and `inputZero`: the same of an input
   * bit in the cycle before; `started`: 0 until the first cycle is over; `unused`: nothing, it
   * fills a group of neighbours.
   */
  readonly role: 'value' | 'zero' | 'input' | 'inputZero' | 'started' | 'unused';
  /** State element of the circuit, or input bit of the row. */
  readonly index: number;
}
