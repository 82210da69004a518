import { GrowableUint32 } from '../../circuit/growable.js';
import { ALL, dependsOn, swapVariables, type Table, VARIABLES, variables } from './functions.js';
import { type Network, NodeKind } from './network.js';

/** Stands behind the last leaf of a cut, and for cuts that have not been made. */
const NONE = 0xffffffff;
/** Numbers kept of a cut: leaves, table and signature. */
const STRIDE = VARIABLES + 2;
const TABLE = VARIABLES;
const SIGNATURE = VARIABLES + 1;

/**
 * Cuts with up to four leaves of the nodes of a network: nodes that a node depends on, and which
 * function of them it is. They are made from the cuts of the operands when they are asked for, a
 * bounded number of each node (P. Pan, C.-C. Lin, "A new retiming-based technology mapping algorithm
 * for LUT-based FPGAs", FPGA 1998).
 *
 * They stay what they are when nodes are replaced, which keeps them true but not complete.
 */
export class Cuts {
  readonly #network: Network;
  readonly #most: number;
  /** Per node, the number of its first cut, and how many there are. */
  readonly #first = new GrowableUint32(1024);
  readonly #count = new GrowableUint32(1024);
  /** Of each cut its leaves in ascending order, the table, and a bit for each leaf, modulo 32. */
  readonly #kept = new GrowableUint32(16384);
  /** The same of the cuts that are being made. */
  readonly #candidates: Uint32Array;
  #candidateCount = 0;
  readonly #union = new Uint32Array(VARIABLES);

  /** `most` is how many cuts of a node are kept, the trivial one apart. */
  constructor(network: Network, most: number) {
    this.#network = network;
    this.#most = most;
    this.#candidates = new Uint32Array((most + 1) ** 2 * STRIDE);
  }

  /** Makes the cuts of an operation, unless they have been made; returns the number of the first. */
  first(node: number): number {
    const network = this.#network;
    const missing = network.nodeCount - this.#first.length;
    if (missing > 0) {
      this.#first.extend(missing, NONE);
      this.#count.extend(missing, 0);
    }
    if (this.#first.get(node) === NONE) this.#make(node);
    return this.#first.get(node);
  }

  /** How many cuts a node has, the one that is the node itself apart. */
  count(node: number): number {
    return this.#count.get(node);
  }

  /** The function of a cut. */
  table(cut: number): Table {
    return this.#kept.get(cut * STRIDE + TABLE);
  }

  /** Variable number `index` of a cut, a node; -1 if there are fewer. */
  leaf(cut: number, index: number): number {
    const leaf = this.#kept.get(cut * STRIDE + index);
    return leaf === NONE ? -1 : leaf;
  }

  #make(node: number): void {
    const network = this.#network;
    const [left, right] = [network.left(node), network.right(node)];
    const isXor = network.kind(node) === NodeKind.Xor;
    const [firstLeft, leftCount] = this.#cutsWithTrivial(left >>> 1);
    const [firstRight, rightCount] = this.#cutsWithTrivial(right >>> 1);
    this.#candidateCount = 0;
    for (let p = 0; p <= leftCount; p++) {
      const one = p === leftCount ? -1 - (left >>> 1) : firstLeft + p;
      for (let q = 0; q <= rightCount; q++) {
        const other = q === rightCount ? -1 - (right >>> 1) : firstRight + q;
        // Two leaves may share a bit: there are at least as many leaves as bits.
        if (bitCount(this.#signatureOf(one) | this.#signatureOf(other)) > VARIABLES) continue;
        if (!this.#join(one, other)) continue;
        const leftTable = this.#spread(one) ^ (left & 1 ? ALL : 0);
        const rightTable = this.#spread(other) ^ (right & 1 ? ALL : 0);
        this.#offer(isXor ? leftTable ^ rightTable : leftTable & rightTable);
      }
    }
    this.#keep(node);
  }

  // The first cut and how many; behind them the trivial one is to be thought of.
  #cutsWithTrivial(node: number): [first: number, count: number] {
    if (this.#network.kind(node) === NodeKind.Leaf) return [0, 0];
    return [this.first(node), this.count(node)];
  }

  // A negative number is the trivial cut of a node.
  #leafOf(cut: number, index: number): number {
    if (cut >= 0) return this.#kept.get(cut * STRIDE + index);
    return index === 0 ? -1 - cut : NONE;
  }

  #signatureOf(cut: number): number {
    return cut >= 0 ? this.#kept.get(cut * STRIDE + SIGNATURE) : 1 << ((-1 - cut) & 31);
  }

  // The leaves of both cuts in order; false if they are too many.
  #join(p: number, q: number): boolean {
    const union = this.#union;
    let [i, k] = [0, 0];
    for (let size = 0; ; size++) {
      const left = i < VARIABLES ? this.#leafOf(p, i) : NONE;
      const right = k < VARIABLES ? this.#leafOf(q, k) : NONE;
      const least = Math.min(left, right);
      if (least === NONE) {
        union.fill(NONE, size);
        return true;
      }
      if (size === VARIABLES) return false;
      union[size] = least;
      if (left === least) i++;
      if (right === least) k++;
    }
  }

  // The function of a cut as one of the leaves that have been joined.
  #spread(cut: number): Table {
    if (cut < 0) return variables[this.#union.indexOf(-1 - cut)]!;
    let result = this.table(cut);
    for (let i = VARIABLES - 1; i >= 0; i--) {
      const leaf = this.#leafOf(cut, i);
      if (leaf !== NONE) result = swapVariables(result, i, this.#union.indexOf(leaf));
    }
    return result;
  }

  // Enters the joined cut without leaves that make no difference, unless one with fewer is there.
  #offer(joined: Table): void {
    const union = this.#union;
    let table = joined;
    let size = 0;
    let signature = 0;
    for (let i = 0; i < VARIABLES && union[i] !== NONE; i++) {
      if (!dependsOn(table, i)) continue;
      if (size < i) table = swapVariables(table, size, i);
      union[size++] = union[i]!;
      signature |= 1 << (union[i]! & 31);
    }
    union.fill(NONE, size);
    for (let other = 0; other < this.#candidateCount; other++) {
      const others = this.#candidates[other * STRIDE + SIGNATURE]!;
      if ((others & ~signature) === 0 && this.#isWithin(other, size)) return;
    }
    const at = this.#candidateCount++ * STRIDE;
    for (let i = 0; i < VARIABLES; i++) this.#candidates[at + i] = union[i]!;
    this.#candidates[at + TABLE] = table;
    this.#candidates[at + SIGNATURE] = signature;
  }

  // Whether the leaves of a candidate are all among those joined.
  #isWithin(candidate: number, size: number): boolean {
    for (let i = 0; i < VARIABLES; i++) {
      const leaf = this.#candidates[candidate * STRIDE + i]!;
      if (leaf === NONE) return true;
      if (i >= size || !this.#union.includes(leaf)) return false;
    }
    return true;
  }

  // The candidates with the fewest leaves.
  #keep(node: number): void {
    this.#first.set(node, this.#kept.length / STRIDE);
    let count = 0;
    for (let size = 0; size <= VARIABLES; size++) {
      for (let cut = 0; cut < this.#candidateCount && count < this.#most; cut++) {
        const at = cut * STRIDE;
        if (this.#sizeAt(at) !== size) continue;
        for (let i = 0; i < STRIDE; i++) this.#kept.push(this.#candidates[at + i]!);
        count++;
      }
    }
    this.#count.set(node, count);
  }

  #sizeAt(at: number): number {
    let size = 0;
    while (size < VARIABLES && this.#candidates[at + size] !== NONE) size++;
    return size;
  }
}

function bitCount(word: number): number {
  let bits = word - ((word >>> 1) & 0x55555555);
  bits = (bits & 0x33333333) + ((bits >>> 2) & 0x33333333);
  return Math.imul((bits + (bits >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}
