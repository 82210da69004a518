import { type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { stateNodes } from '../../logic/stateNodes.js';
import type { Addition } from '../additions/addition.js';
import { alignedOperands } from './alignment.js';
import { islandsOf } from './islands.js';
import { isOneNode, LANES, lanesOf, NO_NODE, Packs, summands, type Tuple } from './packs.js';
import { seedGroups } from './seeds.js';
import { heightsOf, shapesOf, WHOLE_SHAPE } from './shapes.js';

/** Fewer nodes than this are not packed for the sake of a pack that reads them. */
const LEAST = 4;

/** Fewer nodes than this do not start a pack. */
const LEAST_SEEDS = 6;

/** Chains of copies are followed no further. */
const MOST_STEPS = 1000;

/**
 * Graphs of more operations than this are packed only if at least `LEAST_REPEATED` of their
 * operations may start a pack, by cones that look alike to `REPEATED_DEPTH`: of logic that is worth
 * packing most may, and of a million gates at random a third, whose packs take ten seconds to be
 * made and dissolved.
 */
const LARGE = 20_000;
const LEAST_REPEATED = 0.4;
const REPEATED_DEPTH = 8;

/** How deep the cones of the nodes that start a pack must look alike, the best first. */
const SEED_DEPTHS = [WHOLE_SHAPE, 12, 8, 5, 3, 2, 1];

/**
 * Looks for operations that are made many times over on different bits, such as those of a bus or
 * of equal parts of a circuit, and packs them sixteen at a time.
 *
 * Nodes whose cones look alike start packs, and each pack draws in what its nodes read, lane by lane
 * (superword-level parallelism: S. Larsen, S. Amarasinghe, "Exploiting superword level parallelism
 * with multimedia instruction sets", PLDI 2000, here over a graph of gates). State bits that are
 * drawn in find their places in the state that way. Which packs are worth it is decided later; for a
 * large graph that repeats little, none is made but for what is added.
 */
export function growPacks(logic: Logic, additions: readonly Addition[] = []): Packs {
  const grower = new Grower(logic, additions);
  grower.growSummands();
  if (!grower.isPromising()) return grower.packs;
  grower.findIslands();
  for (const depth of SEED_DEPTHS) grower.growAlike(depth);
  grower.growStates();
  return grower.packs;
}

class Grower {
  readonly packs: Packs;
  readonly #logic: Logic;
  readonly #shapes: readonly Uint32Array[];
  readonly #heights: Uint32Array;
  /** See `islandsOf`. */
  #islands: Uint32Array | undefined;
  /** Per state bit its node, or -1 where nothing reads it. */
  readonly #stateNode: Int32Array;
  /** Per node of a state bit, the nodes of the state bits that copy it. */
  readonly #followers: (number[] | undefined)[] = [];
  readonly #waiting: Tuple[] = [];

  constructor(logic: Logic, additions: readonly Addition[]) {
    this.packs = new Packs(logic, additions);
    this.#logic = logic;
    this.#shapes = shapesOf(logic);
    this.#heights = heightsOf(logic);
    this.#stateNode = stateNodes(logic);
    for (const [bit, literal] of logic.next.entries()) {
      const source = nodeOf(literal);
      const node = this.#stateNode[bit]!;
      if (logic.op[source] !== LogicOp.State || node < 0 || node === source) continue;
      this.#followers[source] ??= [];
      this.#followers[source].push(node);
    }
  }

  /** Whether packs may be worth the time to look for them. */
  isPromising(): boolean {
    const { op } = this.#logic;
    const operations = op.reduce((count, each) => count + Number(each >= LogicOp.And), 0);
    if (operations <= LARGE) return true;
    const shape = this.#shapes[REPEATED_DEPTH]!;
    const groups = seedGroups(this.packs, shape, this.#heights, LEAST_SEEDS);
    const repeated = groups.reduce((count, { length }) => count + length, 0);
    return repeated >= operations * LEAST_REPEATED;
  }

  /** Keeps packs from starting in several islands. */
  findIslands(): void {
    this.#islands = islandsOf(this.#logic, this.#shapes[REPEATED_DEPTH]!, LEAST_SEEDS);
  }

  /** Starts packs from what is added, in the lanes in which the sums stand. */
  growSummands(): void {
    for (const addition of this.packs.additions) {
      this.#waiting.push(...summands(addition));
      this.#drawAll();
    }
  }

  /** Starts packs from nodes whose cones look alike to a depth, the highest first. */
  growAlike(depth: number): void {
    const groups = seedGroups(
      this.packs,
      this.#shapes[depth]!,
      this.#heights,
      LEAST_SEEDS,
      this.#islands,
    );
    for (const group of groups) {
      for (const nodes of this.#lanesFor(group)) this.#start(nodes);
    }
  }

  /** Packs what is left of the state bits that copy each other. */
  growStates(): void {
    for (let pack = 0; pack < this.packs.count; pack++) this.#growFollowers(pack);
    for (const chunk of this.#copyHeads()) {
      const first = this.packs.count;
      this.#start(chunk);
      for (let pack = first; pack < this.packs.count; pack++) this.#growFollowers(pack);
    }
  }

  #start(nodes: readonly number[]): void {
    const open = nodes.map((node) => (node >= 0 && this.packs.isPacked(node) ? NO_NODE : node));
    if (countOf(open) < LEAST_SEEDS) return;
    this.#add(open);
    this.#drawAll();
  }

  #drawAll(): void {
    for (let tuple = this.#waiting.pop(); tuple; tuple = this.#waiting.pop()) this.#draw(tuple);
  }

  #add(nodes: readonly number[]): void {
    const op = this.#logic.op[nodes.find((node) => node !== NO_NODE)!]!;
    const operands =
      op === LogicOp.State
        ? [nodes.map((node) => (node < 0 ? -1 : this.#logic.next[this.#logic.a[node]!]!))]
        : alignedOperands(this.packs, nodes, this.#shapes);
    this.packs.add({ op, nodes, operands });
    this.#waiting.push(...operands);
  }

  // Packs the nodes of a tuple that are in no pack yet, each operation apart.
  #draw(tuple: Tuple): void {
    if (isOneNode(tuple)) return;
    const byOp = new Map<number, number[]>();
    for (const [lane, literal] of lanesOf(tuple)) {
      const node = nodeOf(literal);
      const op = this.#logic.op[node]!;
      if (op === LogicOp.Zero || op === LogicOp.Input || this.packs.isPacked(node)) continue;
      // Words of memories and their bits are made one by one.
      if (op > LogicOp.Mux) continue;
      const nodes = byOp.get(op) ?? new Array<number>(LANES).fill(NO_NODE);
      if (!nodes.includes(node)) nodes[lane] = node;
      byOp.set(op, nodes);
    }
    for (const nodes of byOp.values()) {
      if (countOf(nodes) >= LEAST) this.#add(this.#inPlace(nodes));
    }
  }

  // The nodes in the lanes of what they read, where that is one pack; else where they are.
  #inPlace(nodes: readonly number[]): readonly number[] {
    const lanes = new Array<number>(LANES).fill(NO_NODE);
    let pack = -1;
    for (const node of nodes) {
      if (node === NO_NODE) continue;
      const place = this.#affinity(node);
      if (place === undefined) return nodes;
      const lane = place % LANES;
      if (pack === -1) pack = place - lane;
      if (pack !== place - lane || lanes[lane] !== NO_NODE) return nodes;
      lanes[lane] = node;
    }
    return lanes;
  }

  // Sixteen at a time; a node goes to the lane of what it reads where that lane is free.
  #lanesFor(group: readonly number[]): number[][] {
    const open = group.filter((node) => !this.packs.isPacked(node));
    const places = new Map(open.map((node) => [node, this.#affinity(node)]));
    const order = this.#bySharedOperand(open);
    const rank = (node: number): number => places.get(node) ?? Number.POSITIVE_INFINITY;
    order.sort((p, q) => (rank(p) === rank(q) ? 0 : rank(p) - rank(q)));
    const chunks: number[][] = [];
    for (let from = 0; from < order.length; from += LANES) {
      chunks.push(laid(order.slice(from, from + LANES), (node) => places.get(node)));
    }
    return chunks;
  }

  // pack * LANES + lane of the nearest packed node in the cone.
  #affinity(node: number): number | undefined {
    let frontier = [node];
    const { op, a, b, c } = this.#logic;
    for (let depth = 0; depth < 5 && frontier.length < 64; depth++) {
      const below: number[] = [];
      for (const above of frontier) {
        if (op[above]! < LogicOp.And) continue;
        below.push(a[above]! >>> 1, b[above]! >>> 1);
        if (op[above] === LogicOp.Mux) below.push(c[above]! >>> 1);
      }
      const packed = below.find((found) => this.packs.isPacked(found));
      if (packed !== undefined)
        return this.packs.packOf[packed]! * LANES + this.packs.laneOf[packed]!;
      frontier = below;
    }
    return undefined;
  }

  // Those that share an operand with many others come together.
  #bySharedOperand(nodes: readonly number[]): number[] {
    const { a, b, c, op } = this.#logic;
    const reads = (node: number): Literal[] =>
      op[node] === LogicOp.Mux ? [a[node]!, b[node]!, c[node]!] : [a[node]!, b[node]!];
    const counts = new Map<Literal, number>();
    for (const node of nodes) {
      for (const literal of reads(node)) counts.set(literal, (counts.get(literal) ?? 0) + 1);
    }
    const shared = new Map<number, Literal>();
    for (const node of nodes) {
      const [most] = reads(node).sort((p, q) => counts.get(q)! - counts.get(p)!);
      shared.set(node, counts.get(most!)! >= LEAST ? most! : Number.POSITIVE_INFINITY);
    }
    const weight = (node: number): number => {
      const literal = shared.get(node)!;
      return literal === Number.POSITIVE_INFINITY ? 0 : counts.get(literal)!;
    };
    return [...nodes].sort(
      (p, q) => weight(q) - weight(p) || compare(shared.get(p)!, shared.get(q)!) || p - q,
    );
  }

  // State bits that copy the bits of a pack stand in the same lanes, pack after pack.
  #growFollowers(number: number): void {
    const pack = this.packs.get(number);
    if (pack?.op !== LogicOp.State) return;
    for (;;) {
      const nodes = pack.nodes.map((node) =>
        node < 0
          ? NO_NODE
          : (this.#followers[node]?.find((f) => !this.packs.isPacked(f)) ?? NO_NODE),
      );
      if (countOf(nodes) < LEAST) return;
      this.#add(nodes);
      this.#drawAll();
    }
  }

  // State bits at the heads of chains of copies, those with the longest chains together.
  #copyHeads(): number[][] {
    const length = new Map<number, number>();
    const lengthOf = (head: number): number => {
      let steps = 0;
      let node: number | undefined = head;
      for (; node !== undefined && steps < MOST_STEPS; steps++) {
        node = this.#followers[node]?.find((f) => !this.packs.isPacked(f));
      }
      return steps;
    };
    const { next, op } = this.#logic;
    for (const [bit, node] of this.#stateNode.entries()) {
      if (node < 0 || this.packs.isPacked(node)) continue;
      const source = nodeOf(next[bit]!);
      const isCopy = op[source] === LogicOp.State && source !== node;
      if (isCopy && !this.packs.isPacked(source)) continue;
      if (isCopy || this.#followers[node]) length.set(node, lengthOf(node));
    }
    const heads = [...length.keys()].sort((p, q) => length.get(q)! - length.get(p)! || p - q);
    const chunks: number[][] = [];
    for (let from = 0; from < heads.length; from += LANES) {
      chunks.push(laid(heads.slice(from, from + LANES), () => undefined));
    }
    return chunks;
  }
}

const compare = (p: number, q: number): number => (p === q ? 0 : p < q ? -1 : 1);

const countOf = (nodes: readonly number[]): number =>
  nodes.reduce((count, node) => count + Number(node !== NO_NODE), 0);

function laid(nodes: readonly number[], place: (node: number) => number | undefined): number[] {
  const lanes = new Array<number>(LANES).fill(NO_NODE);
  const rest: number[] = [];
  for (const node of nodes) {
    const wanted = place(node);
    if (wanted !== undefined && lanes[wanted % LANES] === NO_NODE) lanes[wanted % LANES] = node;
    else rest.push(node);
  }
  for (const node of rest) lanes[lanes.indexOf(NO_NODE)] = node;
  return lanes;
}
