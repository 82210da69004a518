/**
 * One index of a memory's words. Its `bits` address nets make an unsigned number v, which means
 * element (v - low) modulo 2^bits, where that is below `size`; otherwise there is no such word.
 */
export interface MemoryIndex {
  readonly low: number;
  readonly size: number;
  /** Enough for all elements: size <= 2^bits. */
  readonly bits: number;
}

/**
 * A port by which logic reads a word at any time (asynchronously).
 *
 * The data nets are driven by `GateKind.MemoryRead` and have the address nets as their fan-in. A
 * word that does not exist, or an address with a bit that is x, reads as x (IEEE 1364-2005, 5.2.2).
 */
export interface ReadPort {
  /** The nets of each index, outermost first, each least significant bit first. */
  readonly address: Uint32Array;
  /** A net for each bit of the word, least significant first; `NO_NET` for one that nobody reads. */
  readonly data: Uint32Array;
}

/**
 * A port by which a clock edge writes a word.
 *
 * At the edge of `clock`, the bits whose mask is 1 take their data if `enable` is 1, all as settled
 * before the edge. Of several ports that write at one edge, the later one wins. Where enable, mask
 * or a bit of the address is x, what may have been written is x where it differs from before. A
 * word that does not exist is not written.
 */
export interface WritePort {
  readonly clock: number;
  /** An `Edge`. */
  readonly edge: number;
  /** `NO_NET` where every edge writes. */
  readonly enable: number;
  /** As in `ReadPort`. */
  readonly address: Uint32Array;
  readonly data: Uint32Array;
  /** A net for each bit of the word; absent where all are written. */
  readonly mask: Uint32Array | undefined;
}

/** How the words of a memory are declared. */
export interface WordForm {
  /** Declared left and right index of the bits. */
  readonly msb: number;
  readonly lsb: number;
  readonly isSigned: boolean;
}

/** What a memory is, whatever its ports. */
export interface MemoryShape {
  /** Full hierarchical name. */
  readonly name: string;
  readonly width: number;
  /** `[width-1:0]` and unsigned unless given. */
  readonly word?: WordForm;
  /** Outermost first; the last one counts fastest in the order of the words. */
  readonly indices: readonly MemoryIndex[];
  /**
   * What the netlist itself gives at power-up, in the bytes of `Engine.memoryState` of a
   * three-valued run, with x where it gives nothing; undefined where it gives nothing at all.
   */
  readonly initial: Uint8Array | undefined;
  /** Index into `Circuit.sources`, and byte offset, of its declaration. */
  readonly sourceIndex: number;
  readonly offset: number;
}

/** Words that are held together and not as registers. */
export interface Memory extends MemoryShape {
  /** Number of words. */
  readonly depth: number;
  readonly reads: readonly ReadPort[];
  /** In the order in which they write. */
  readonly writes: readonly WritePort[];
}

/** Number of words that indices tell apart. */
export const depthOf = (indices: readonly MemoryIndex[]): number =>
  indices.reduce((product, { size }) => product * size, 1);

/** Address nets of a port: those of all indices. */
export const addressBits = (indices: readonly MemoryIndex[]): number =>
  indices.reduce((sum, { bits }) => sum + bits, 0);

/**
 * The word that an address means, or -1 where there is none. `indexAt` gives the number that the
 * nets from a place on make.
 */
export function wordAt(
  indices: readonly MemoryIndex[],
  indexAt: (place: number, bits: number) => number,
): number {
  let word = 0;
  let place = 0;
  for (const { low, size, bits } of indices) {
    const element = moduloPower(indexAt(place, bits) - low, bits);
    if (element >= size) return -1;
    word = word * size + element;
    place += bits;
  }
  return word;
}

/** A whole number modulo 2^bits, never negative. */
export const moduloPower = (value: number, bits: number): number => {
  const power = 2 ** bits;
  return ((value % power) + power) % power;
};
