/** What a signal of a module is to it. */
export type Role = 'input' | 'output' | 'register' | 'latch' | 'wire' | 'parameter';

/** A named value of a module: bit 0 is the rightmost one of `[msb:lsb]`. */
export interface Signal {
  readonly name: string;
  readonly role: Role;
  /** Whether it is an output port besides. */
  readonly isPort: boolean;
  readonly width: number;
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
}

/** Bits `low` … `low + width - 1` of a signal, below so many zeros. */
export interface Piece {
  readonly signal: Signal;
  readonly low: number;
  readonly width: number;
  readonly zeros: number;
}

/**
 * What is worked out of pieces `a`, `b`, … of equal width, without a sign unless said. In the
 * order in which a random choice counts them, the simplest first.
 */
export const operators = [
  ...['copy', 'constant', 'not', 'and', 'or', 'xor', 'xnor', 'mux'],
  ...['add', 'subtract', 'negate', 'multiply', 'divide', 'remainder', 'square'],
  // `b` is at most three bits wide; the last one keeps the sign of `a`.
  ...['shiftLeft', 'shiftRight', 'shiftSigned'],
  ...['allOf', 'notAllOf', 'anyOf', 'noneOf', 'parity', 'notParity'],
  ...['logicalNot', 'logicalAnd', 'logicalOr'],
  ...['equal', 'unequal', 'same', 'notSame', 'less', 'notMore', 'more', 'notLess'],
  ...['lessSigned', 'notLessSigned'],
  // `{a, b}`; `{n{a}}`; bit `b` of the four or eight bits of `a`.
  ...['join', 'repeat', 'bitOf'],
  // Gates of single bits with one to four inputs.
  ...['gateAnd', 'gateNand', 'gateOr', 'gateNor', 'gateXor', 'gateXnor', 'gateBuf', 'gateNot'],
  // A net with two drivers or a pull: as `mux`, as `and`, as `or`, `c ? a : 1`, `c ? a : 0`.
  ...['bus', 'wiredAnd', 'wiredOr', 'pulledUp', 'pulledDown'],
] as const;
export type Operator = (typeof operators)[number];

export interface Operation {
  readonly kind: 'operation';
  readonly operator: Operator;
  readonly target: Signal;
  readonly pieces: readonly Piece[];
  /** Of a constant its value, of `repeat` the count. */
  readonly value: number;
}

export interface Control {
  /** Bit of the port `rst`, and the level at which it acts. */
  readonly bit: number;
  readonly level: 0 | 1;
  readonly value: number;
}

export interface Register {
  readonly kind: 'register';
  readonly target: Signal;
  readonly data: Piece;
  readonly isFalling: boolean;
  /** One bit. */
  readonly enable: Piece | undefined;
  /** Goes before the enable; `by` is one bit. */
  readonly clear: { readonly by: Piece; readonly value: number } | undefined;
  readonly controls: readonly Control[];
  readonly initial: number | undefined;
}

export interface Latch {
  readonly kind: 'latch';
  readonly target: Signal;
  readonly data: Piece;
  /** Level of the clock at which it is open. */
  readonly level: 0 | 1;
}

/**
 * An instance of a module, or an array of `count`; the pieces of `inputs` are as wide as the ports,
 * or `count` times as wide, and each target is `count` times as wide as its port.
 */
export interface Instance {
  readonly kind: 'instance';
  readonly name: string;
  readonly module: Module;
  readonly count: number;
  /** Value of the parameter; undefined leaves it. */
  readonly parameter: number | undefined;
  readonly inputs: readonly Piece[];
  readonly targets: readonly Signal[];
}

export type Item = Operation | Register | Latch | Instance;

export interface Module {
  readonly name: string;
  readonly clock: Signal;
  /** Two bits, for asynchronous controls. */
  readonly reset: Signal;
  readonly inputs: readonly Signal[];
  readonly outputs: readonly Signal[];
  /** Four bits; the value of the signal unless an instance gives another. */
  readonly parameter: Signal;
  readonly parameterValue: number;
  /** All but ports and the parameter. */
  readonly inner: readonly Signal[];
  readonly items: readonly Item[];
}

/** A hierarchical design; the last module is the top. */
export interface Design {
  readonly modules: readonly Module[];
  readonly top: Module;
}
