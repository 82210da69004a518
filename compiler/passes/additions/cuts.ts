import { type Literal, type Logic, LogicOp } from '../../logic/logic.js';

/** Most leaves of a cut. */
const LEAVES = 3;

/** Cuts that are kept of each node, beside the node itself. */
const MOST = 5;

/** No leaf. Greater than every node, so that leaves stay sorted. */
export const NO_LEAF = 0xffffffff;

/** Values of the three leaves of a cut, the first one lowest, over their eight combinations. */
const LEAF_TABLES = [0xaa, 0xcc, 0xf0] as const;

/** The exclusive-or of three leaves. */
export const PARITY = 0x96;

/** Per truth table, for a majority: which leaves are inverted, plus 8 if the result is; else -1. */
const majorityForms = new Int8Array(256).fill(-1);
for (let form = 0; form < 16; form++) {
  const [p, q, r] = LEAF_TABLES.map((table, leaf) => table ^ (((form >>> leaf) & 1) * 0xff)) as [
    number,
    number,
    number,
  ];
  const table = ((p & q) | (r & (p | q))) ^ ((form >>> 3) * 0xff);
  if (majorityForms[table]! < 0) majorityForms[table] = form;
}

/** The form of a majority of three leaves (see `majorityForms`), or -1. */
export const majorityForm = (table: number): number => majorityForms[table]!;

/** What a node is of up to three nodes below it, of which it is a function. */
export interface Cut {
  /** In ascending order, `NO_LEAF` at the end where there are fewer. */
  readonly leaves: readonly [number, number, number];
  /** The value of the node for each combination of the leaves, which are not inverted. */
  readonly table: number;
}

/**
 * Lists cuts of at most three leaves with their truth tables, bottom up, a few for each node
 * (J. Cong, C. Wu, Y. Ding: "Cut ranking and pruning", FPGA 1999): majorities and exclusive-ors
 * first, then those of the fewest leaves. `found` is told each of the majorities and exclusive-ors
 * of three.
 */
export function eachCut(logic: Logic, found: (node: number, cut: Cut) => void): void {
  const finder = new CutFinder(logic);
  for (let node = 1; node < logic.nodeCount; node++) finder.visit(node, found);
}

class CutFinder {
  readonly #logic: Logic;
  readonly #count: Uint8Array;
  readonly #leaves: Uint32Array;
  readonly #tables: Uint8Array;
  /** Per cut a bit for each of its leaves, perhaps one for several. */
  readonly #marks: Uint32Array;
  // The cuts of the node at hand.
  readonly #own = new Uint32Array(64 * LEAVES);
  readonly #ownTables = new Uint8Array(64);
  readonly #ownRanks = new Uint8Array(64);
  #ownCount = 0;

  constructor(logic: Logic) {
    this.#logic = logic;
    this.#count = new Uint8Array(logic.nodeCount);
    this.#leaves = new Uint32Array(logic.nodeCount * MOST * LEAVES);
    this.#tables = new Uint8Array(logic.nodeCount * MOST);
    this.#marks = new Uint32Array(logic.nodeCount * MOST);
  }

  visit(node: number, found: (node: number, cut: Cut) => void): void {
    const { op, a, b, c } = this.#logic;
    const kind = op[node]!;
    if (kind < LogicOp.And || kind > LogicOp.Mux) return;
    this.#ownCount = 0;
    if (kind === LogicOp.Mux) this.#joinThree(a[node]!, b[node]!, c[node]!);
    else this.#joinTwo(kind, a[node]!, b[node]!);
    this.#keep(node, found);
  }

  #joinTwo(kind: number, p: Literal, q: Literal): void {
    const [left, right] = [p >>> 1, q >>> 1];
    for (let i = -1; i < this.#count[left]!; i++) {
      const marks = this.#marksOf(left, i);
      for (let j = -1; j < this.#count[right]!; j++) {
        if (areMany(marks | this.#marksOf(right, j))) continue;
        if (!this.#merge(left, i, right, j)) continue;
        const first = this.#tableOf(left, i) ^ -(p & 1);
        const second = this.#tableOf(right, j) ^ -(q & 1);
        this.#add((kind === LogicOp.And ? first & second : first ^ second) & 0xff);
      }
    }
  }

  #joinThree(select: Literal, zero: Literal, one: Literal): void {
    const [s, z, o] = [select >>> 1, zero >>> 1, one >>> 1];
    for (let i = -1; i < this.#count[s]!; i++) {
      for (let j = -1; j < this.#count[z]!; j++) {
        const marks = this.#marksOf(s, i) | this.#marksOf(z, j);
        if (areMany(marks) || !this.#merge(s, i, z, j)) continue;
        const [l0, l1, l2] = this.#merged;
        for (let k = -1; k < this.#count[o]!; k++) {
          if (areMany(marks | this.#marksOf(o, k))) continue;
          this.#merged[0] = l0;
          this.#merged[1] = l1;
          this.#merged[2] = l2;
          if (!this.#take(o, k)) continue;
          const by = this.#tableOf(s, i) ^ -(select & 1);
          const low = this.#tableOf(z, j) ^ -(zero & 1);
          const high = this.#tableOf(o, k) ^ -(one & 1);
          this.#add((low ^ (by & (low ^ high))) & 0xff);
        }
      }
    }
  }

  #marksOf(node: number, cut: number): number {
    if (cut >= 0) return this.#marks[node * MOST + cut]!;
    return node === 0 ? 0 : markOf(node);
  }

  readonly #merged: [number, number, number] = [0, 0, 0];

  // The leaves of two cuts together in `#merged`; false if they are too many. Cut -1 is the node.
  #merge(left: number, i: number, right: number, j: number): boolean {
    this.#merged.fill(NO_LEAF);
    this.#take(left, i);
    return this.#take(right, j);
  }

  #take(node: number, cut: number): boolean {
    if (cut < 0) return node === 0 || this.#insert(node);
    const at = (node * MOST + cut) * LEAVES;
    for (let k = at; k < at + LEAVES; k++) {
      const leaf = this.#leaves[k]!;
      if (leaf === NO_LEAF) return true;
      if (!this.#insert(leaf)) return false;
    }
    return true;
  }

  #insert(leaf: number): boolean {
    const m = this.#merged;
    if (leaf === m[0] || leaf === m[1] || leaf === m[2]) return true;
    if (m[2] !== NO_LEAF) return false;
    if (leaf > m[1]) m[2] = leaf;
    else {
      m[2] = m[1];
      if (leaf > m[0]) m[1] = leaf;
      else {
        m[1] = m[0];
        m[0] = leaf;
      }
    }
    return true;
  }

  // The truth table of a cut over the leaves in `#merged`.
  #tableOf(node: number, cut: number): number {
    const m = this.#merged;
    if (cut < 0) {
      if (node === 0) return 0;
      return LEAF_TABLES[node === m[0] ? 0 : node === m[1] ? 1 : 2];
    }
    const at = node * MOST + cut;
    const table = this.#tables[at]!;
    // Place of each leaf of the cut among the merged ones.
    let places = 0;
    for (let k = 0; k < LEAVES; k++) {
      const leaf = this.#leaves[at * LEAVES + k]!;
      if (leaf === NO_LEAF) break;
      places |= (leaf === m[0] ? 1 : leaf === m[1] ? 2 : 3) << (2 * k);
    }
    return expansions[places * 256 + table]!;
  }

  #add(table: number): void {
    const [l0, l1, l2] = this.#merged;
    const own = this.#own;
    for (let i = 0; i < this.#ownCount; i++) {
      const at = i * LEAVES;
      if (own[at] === l0 && own[at + 1] === l1 && own[at + 2] === l2) return;
    }
    if (this.#ownCount * LEAVES === own.length) return;
    const at = this.#ownCount * LEAVES;
    own[at] = l0;
    own[at + 1] = l1;
    own[at + 2] = l2;
    this.#ownTables[this.#ownCount] = table;
    this.#ownRanks[this.#ownCount] = this.#rank(this.#ownCount);
    this.#ownCount++;
  }

  #keep(node: number, found: (node: number, cut: Cut) => void): void {
    let kept = 0;
    for (let rank = 0; rank < 4; rank++) {
      for (let i = 0; i < this.#ownCount; i++) {
        if (this.#ownRanks[i] !== rank) continue;
        const from = i * LEAVES;
        const table = this.#ownTables[i]!;
        if (rank === 0) {
          const leaves = [this.#own[from]!, this.#own[from + 1]!, this.#own[from + 2]!] as const;
          found(node, { leaves, table });
        }
        if (kept === MOST) continue;
        const to = (node * MOST + kept) * LEAVES;
        let marks = 0;
        for (let k = 0; k < LEAVES; k++) {
          const leaf = this.#own[from + k]!;
          this.#leaves[to + k] = leaf;
          if (leaf !== NO_LEAF) marks |= markOf(leaf);
        }
        this.#marks[node * MOST + kept] = marks;
        this.#tables[node * MOST + kept++] = table;
      }
    }
    this.#count[node] = kept;
  }

  #rank(i: number): number {
    const table = this.#ownTables[i]!;
    if (table === PARITY || table === (PARITY ^ 0xff) || majorityForm(table) >= 0) return 0;
    if (this.#own[i * LEAVES + 1] === NO_LEAF) return 1;
    return this.#own[i * LEAVES + 2] === NO_LEAF ? 2 : 3;
  }
}

const markOf = (leaf: number): number => 1 << (leaf & 31);

// Whether more than three bits are 1.
function areMany(marks: number): boolean {
  let left = marks & (marks - 1);
  left &= left - 1;
  return (left & (left - 1)) !== 0;
}

// Per place of each leaf (two bits each, 0 for none) and truth table: the table over three leaves.
const expansions = new Uint8Array(64 * 256);
for (let places = 0; places < 64; places++) {
  const place = [places & 3, (places >>> 2) & 3, places >>> 4];
  for (let table = 0; table < 256; table++) {
    let wide = 0;
    for (let row = 0; row < 8; row++) {
      let narrow = 0;
      for (const [leaf, at] of place.entries()) {
        if (at > 0) narrow |= ((row >>> (at - 1)) & 1) << leaf;
      }
      wide |= ((table >>> narrow) & 1) << row;
    }
    expansions[places * 256 + table] = wide;
  }
}
