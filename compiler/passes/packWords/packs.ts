import { type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';

/** Lanes of a pack: the bytes of a 128-bit vector. */
export const LANES = 16;

/** A lane without a node. */
export const NO_NODE = -1;

/** Up to sixteen literals that are wanted side by side; -1 where a lane does not matter. */
export type Tuple = readonly Literal[];

/** Up to sixteen nodes of one operation that are computed, or kept, as one vector. */
export interface Pack {
  /** `And`, `Xor`, `Mux` or `State`. */
  readonly op: number;
  /** Per lane its node, or `NO_NODE`. */
  readonly nodes: readonly number[];
  /** What the operation reads, per operand; of a pack of state bits, the one tuple of their next values. */
  readonly operands: readonly Tuple[];
}

/** The packs of a graph while they are looked for: each node is in one of them or in none. */
export class Packs {
  readonly logic: Logic;
  readonly #packs: (Pack | undefined)[] = [];
  /** Per node its pack, or -1. */
  readonly packOf: Int32Array;
  /** Per node its lane in its pack. */
  readonly laneOf: Uint8Array;

  constructor(logic: Logic) {
    this.logic = logic;
    this.packOf = new Int32Array(logic.nodeCount).fill(-1);
    this.laneOf = new Uint8Array(logic.nodeCount);
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

  /** Takes a pack apart: its nodes are in none then. */
  dissolve(pack: number): void {
    for (const node of this.#packs[pack]?.nodes ?? []) {
      if (node !== NO_NODE) this.packOf[node] = -1;
    }
    this.#packs[pack] = undefined;
  }

  /** The packs that stand, with their numbers. */
  *standing(): Generator<[number, Pack]> {
    for (const [number, pack] of this.#packs.entries()) if (pack) yield [number, pack];
  }
}

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
