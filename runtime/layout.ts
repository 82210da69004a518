/** A port as the runtime sees it: a name, and where its bits stand in a packed row. */
export interface PortLayout {
  readonly name: string;
  readonly width: number;
  /** Place of the port's least significant bit in the packed row. */
  readonly offset: number;
  /** Declared left and right index; both 0 for a scalar. */
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
}

/**
 * The shape of one packed row: all ports in declaration order, each least significant bit first,
 * joined, padded with zeros to whole 32-bit words.
 *
 * Bit b of the row is bit `b % 32` of word `b >> 5`. In three-valued models a second group of as
 * many words follows, with a 1 for each bit that is x (and 0 in the first group).
 */
export interface RowLayout {
  readonly ports: readonly PortLayout[];
  readonly bits: number;
  /** 32-bit words of one value group: ceil(bits / 32). */
  readonly words: number;
}

/** What travels with a model: everything a caller must know to feed it and to read it. */
export interface ModelLayout {
  readonly name: string;
  readonly threeValued: boolean;
  /** Input ports (`clk`) and bits of ports (`clks[2]`) that tick by themselves. */
  readonly clocks: readonly string[];
  /** Data inputs; clock ports tick by themselves and have no place in a row. */
  readonly inputs: RowLayout;
  readonly outputs: RowLayout;
  /**
   * State elements in a fixed order, by full name: registers, then latches, then the nets that
   * combinational loops remember.
   */
  readonly stateNames: readonly string[];
  /** Memories that are no registers, in a fixed order; their contents are no part of `stateNames`. */
  readonly memories: readonly MemoryLayout[];
}

/** A memory as the runtime sees it: `depth` words of `width` bits. */
export interface MemoryLayout {
  /** Full hierarchical name. */
  readonly name: string;
  readonly width: number;
  readonly depth: number;
}

/** 32-bit words from one row to the next: one group, or two where x is possible. */
export const rowStride = (row: RowLayout, threeValued: boolean): number =>
  threeValued ? row.words * 2 : row.words;

/** Places ports one after another in a row. */
export function layRow(ports: readonly Omit<PortLayout, 'offset'>[]): RowLayout {
  let bits = 0;
  const placed = ports.map((port) => {
    const offset = bits;
    bits += port.width;
    return { ...port, offset };
  });
  return { ports: placed, bits, words: (bits + 31) >>> 5 };
}
