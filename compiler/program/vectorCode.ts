/**
 * Operations on vectors of sixteen bytes, of which bit 0 of each byte counts, except where they
 * are told to be whole. Others work on
 * whole numbers of 64 bits.
 */
export const VectorOp = {
  /** Sixteen state bits from place `a` on. */
  State: 0,
  /** What scalar code has stored in lane slot `a`. */
  Slot: 1,
  /** The program's value `a` in all lanes. */
  Splat: 2,
  /** Bytes of the stimulus row, `lanes[i]` in lane i; -1 where it does not matter. */
  RowBytes: 3,
  /** Lane `lanes[i]` of `a`, or of `b` where that is 16 or more. */
  Shuffle: 4,
  /** `a`, inverted in the lanes where `lanes[i]` is 1. */
  Invert: 5,
  And: 6,
  /** `a & ~b`. */
  AndNot: 7,
  Or: 8,
  Xor: 9,
  /** `a` selects: `b` where it is 0, `c` where it is 1. */
  Mux: 10,
  /** Bit `lanes[i]` of the whole byte i of `a`; -1 where it does not matter. */
  Pick: 11,
  /** Whole bytes: those of `a` one place higher, with the bits of `b` as their lowest ones. */
  Stack: 12,
  /** The number of sixteen bits that the lanes of `a` make, lane 0 lowest. */
  Number: 13,
  /** The number `lanes`, in sixteens of bits, the lowest first. */
  Constant: 14,
  /** The number `a + b`. */
  Add: 15,
  /** The number `a`, `lanes[0]` bits up, or down where that is negative. */
  Shift: 16,
  /** The numbers `a | b`, of which no bit is 1 in both. */
  Join: 17,
  /** The bits of the number `a` that are 1 in the number `b`. */
  Mask: 18,
  /** The bits of the number `a`, inverted where they are 1 in the number `b`. */
  Flip: 19,
  /** Whole bytes: the eight of the number `a`, twice. */
  Bytes: 20,
} as const;

/** How many operands are results of other steps, indexed by `VectorOp`. */
export const stepOperands: readonly number[] = [
  0, 0, 0, 0, 2, 1, 2, 2, 2, 2, 3, 1, 2, 1, 0, 2, 1, 2, 2, 2, 1,
];

/** Whether a step gives a number and no vector. */
export const isNumber = (op: number): boolean => op >= VectorOp.Number && op <= VectorOp.Flip;

/** One vector operation. Operands are steps, except where `VectorOp` says otherwise. */
export interface VectorStep {
  readonly op: number;
  readonly a: number;
  readonly b: number;
  readonly c: number;
  readonly lanes: readonly number[];
}

/** Where a vector goes. `invert` tells that it is kept inverted. */
export interface VectorSink {
  readonly step: number;
  readonly invert: boolean;
  /** Place of the first state bit, first bit of the response row, or number of the lane slot. */
  readonly to: number;
}

/** Whole bytes that become bytes of the response row. */
export interface RowSink {
  readonly step: number;
  /** Where lane 0 goes, in bytes; a multiple of sixteen. */
  readonly to: number;
  /** Which of the four words of the vector are stored, each to its place in the sixteen bytes. */
  readonly words: readonly number[];
}

/** Bits that scalar code stores for vectors to read. */
export interface Gather {
  readonly slot: number;
  /** The program's value per lane; -1 where it does not matter. */
  readonly values: Int32Array;
}

/**
 * The part of a program that works on sixteen bits at a time.
 *
 * Scalar code and vectors take turns in stages: the blocks of a stage, its gathers, its steps. Lane
 * slots are sixteen bytes each, that vectors or gathers fill; scalar code reads a lane as an input
 * of the program behind those of the stimulus row: input `rowInputs + slot * 16 + lane`.
 */
export interface VectorCode {
  readonly slotCount: number;
  /** Bits of the stimulus row; the program's inputs from there on are lanes. */
  readonly rowInputs: number;
  readonly steps: readonly VectorStep[];
  readonly stages: readonly VectorStage[];
  /** Steps whose lanes are kept in slots. */
  readonly slots: readonly VectorSink[];
  readonly states: readonly VectorSink[];
  /** Sixteen bits of the response row each; `to` is a multiple of 16. */
  readonly outputs: readonly VectorSink[];
  /** The words of the response row that are made as whole bytes. */
  readonly rows: readonly RowSink[];
}

/** One turn of scalar code and vectors. */
export interface VectorStage {
  /** Number of blocks of the program up to the end of this stage. */
  readonly blockEnd: number;
  readonly gathers: readonly Gather[];
  /** Number of steps up to the end of this stage. */
  readonly stepEnd: number;
}
