import { FALSE, type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import type { Addition } from '../additions/addition.js';
import { deadNodes } from '../additions/deadNodes.js';

/** Lanes of a pack: the bytes of a 128-bit vector. */
export const LANES = 16;

/** A lane without a node. */
export const NO_NODE = -1;

/** Up to sixteen literals that are wanted side by side; -1 where a lane does not matter. */
export type Tuple = readonly Literal[];

/** The operation of a pack whose nodes are bits of a sum. Greater than those of `LogicOp`. */
export const SUM = 16;

/** Up to sixteen nodes of one operation that are computed, or kept, as one vector. */
export interface Pack {
  /** `And`, `Xor`, `Mux`, `State` or `SUM`. */
  readonly op: number;
  /** Per lane its node, or `NO_NODE`. */
  readonly nodes: readonly number[];
  /**
   * What the operation reads, per operand; of a pack of state bits, the one tuple of their next
   * values; of bits of a sum, all bits that are added, see `summands`.
   */
  readonly operands: readonly Tuple[];
  /** Of bits of a sum: number of the addition, and the bit in lane 0. */
  readonly sum?: { readonly addition: number; readonly first: number };
}

/**
 * The packs of a graph while they are looked for: each node is in one of them or in none. Those of
 * the additions stand from the start.
 */
export class Packs {
  readonly logic: Logic;
  readonly additions: readonly Addition[];
  /** Additions that have been dissolved. */
  readonly dissolved = new Set<Addition>();
  /** Per node, 1 if nothing needs it while all additions stand. */
  readonly isDead: Uint8Array;
  /** Per addition the numbers of its packs. */
  readonly packsOfAddition: readonly number[][];
  readonly #packs: (Pack | undefined)[] = [];
  /** Per node its pack, or -1. */
  readonly packOf: Int32Array;
  /** Per node its lane in its pack. */
  readonly laneOf: Uint8Array;

  constructor(logic: Logic, additions: readonly Addition[] = []) {
    this.logic = logic;
    this.additions = additions;
    this.packOf = new Int32Array(logic.nodeCount).fill(-1);
    this.laneOf = new Uint8Array(logic.nodeCount);
    this.isDead =
      additions.length === 0 ? new Uint8Array(logic.nodeCount) : deadNodes(logic, additions);
    this.packsOfAddition = additions.map((addition, number) => this.#addSum(addition, number));
  }

  // Bit i of a sum stands in lane i % 16, whatever else becomes of it.
  #addSum(addition: Addition, number: number): number[] {
    const operands = summands(addition);
    const packs: number[] = [];
    for (let first = 0; first < addition.width; first += LANES) {
      const nodes = Array.from({ length: LANES }, (_, lane) => {
        const literal = addition.sum[first + lane] ?? -1;
        return literal < 0 ? NO_NODE : nodeOf(literal);
      });
      if (nodes.every((node) => node === NO_NODE)) continue;
      packs.push(this.add({ op: SUM, nodes, operands, sum: { addition: number, first } }));
    }
    return packs;
  }

  /** Packs that have been made, dissolved ones included. */
  get count(): number {
    return this.#packs.length;
  }

  /** A pack by its number, undefined if it has been dissolved. */
  get(pack: number): Pack | undefined {
    return this.#packs[pack];
  }

  isPacked(node: number): boolean {
    return this.packOf[node]! >= 0;
  }

  /** Adds a pack; its nodes must be in none. Returns its number. */
  add(pack: Pack): number {
    const number = this.#packs.push(pack) - 1;
    for (const [lane, node] of pack.nodes.entries()) {
      if (node === NO_NODE) continue;
      this.packOf[node] = number;
      this.laneOf[node] = lane;
    }
    return number;
  }

  /** Takes a pack apart: its nodes are in none then. Bits of a sum go together. */
  dissolve(pack: number): void {
    const { sum } = this.#packs[pack] ?? {};
    if (sum !== undefined) this.dissolved.add(this.additions[sum.addition]!);
    for (const each of sum === undefined ? [pack] : this.packsOfAddition[sum.addition]!) {
      for (const node of this.#packs[each]?.nodes ?? []) {
        if (node !== NO_NODE) this.packOf[node] = -1;
      }
      this.#packs[each] = undefined;
    }
  }

  /** The packs that stand, with their numbers. */
  *standing(): Generator<[number, Pack]> {
    for (const [number, pack] of this.#packs.entries()) if (pack) yield [number, pack];
  }
}

/** Sixteen bits at a time of each number that is added, constants left out. */
export function summands({ words, width }: Addition): Tuple[] {
  return words.flatMap((word) =>
    chunksOf(word, width).filter((tuple) => tuple.some((literal) => literal >= 0)),
  );
}

/** A number's bits in tuples, -1 where it has none. */
export const chunksOf = (word: readonly Literal[], width: number): Tuple[] =>
  Array.from({ length: Math.ceil(width / LANES) }, (_, chunk) =>
    Array.from({ length: LANES }, (_, lane) => {
      const literal = word[chunk * LANES + lane] ?? FALSE;
      return literal === FALSE ? -1 : literal;
    }),
  );

/** Literals of a tuple that count, lane by lane. */
export function* lanesOf(tuple: Tuple): Generator<[lane: number, literal: Literal]> {
  for (let lane = 0; lane < tuple.length; lane++) if (tuple[lane]! >= 0) yield [lane, tuple[lane]!];
}

/** Whether all lanes that count are one literal, up to inversion. */
export function isOneNode(tuple: Tuple): boolean {
  let node = -1;
  for (const [, literal] of lanesOf(tuple)) {
    if (node >= 0 && nodeOf(literal) !== node) return false;
    node = nodeOf(literal);
  }
  return true;
}

/** Operations of packs that compute something. */
export const isOperation = (op: number): boolean => op >= LogicOp.And;
