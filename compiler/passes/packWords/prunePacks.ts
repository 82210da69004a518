import { LogicOp, nodeOf } from '../../logic/logic.js';
import { isOneNode, lanesOf, NO_NODE, type Pack, type Packs, type Tuple } from './packs.js';
import { type Readers, readersOf } from './readers.js';

/** What things cost, in instructions. */
const Cost = {
  /** An and or exclusive-or of one bit, with the inversions that come with some. */
  bit: 1.15,
  /** A multiplexer of one bit. */
  mux: 3,
  vector: 1,
  vectorMux: 3,
  splat: 1,
  /** Bringing the lanes of one vector into another order. */
  permute: 1.5,
  /** Joining lanes of one more vector. */
  join: 3,
  /** Storing one bit that is computed by itself, for a vector to hold it. */
  gather: 1.5,
  /** Copying a bit of the state, or an input, for that. */
  copy: 2,
  /** Reading a lane as a bit: a load in place of a register. */
  lane: 1.2,
  store: 1,
  /** Sixteen input bits spread over lanes. */
  inputs: 4,
  /** Waiting for narrow stores before a vector can be loaded from them. */
  stall: 8,
} as const;

/** Packing costs calls and waits that are not counted: it must save at least this part. */
const LEAST_SAVED = 0.15;

/** Sweeps over all packs; few are dissolved after the first ones. */
const MOST_SWEEPS = 8;

/**
 * Dissolves packs that cost more than they save: what they read must be brought together first, and
 * who reads single lanes pays for that.
 */
export function prunePacks(packs: Packs): void {
  const prices = new Prices(packs);
  for (let sweep = 0; sweep < MOST_SWEEPS; sweep++) {
    let dissolved = 0;
    const gains: [gain: number, pack: number][] = [];
    for (const [number, pack] of packs.standing()) {
      const gain = prices.gain(number, pack);
      if (gain < 0) gains.push([gain, number]);
    }
    gains.sort(([p], [q]) => p - q);
    for (const [, number] of gains) {
      // What was dissolved before it may have changed the sum.
      const pack = packs.get(number);
      if (pack === undefined || prices.gain(number, pack) >= 0) continue;
      packs.dissolve(number);
      dissolved++;
    }
    if (dissolved === 0) return;
  }
}

/** Whether the packs that stand save enough of the whole graph's cost. */
export function areWorthIt(packs: Packs): boolean {
  return new Prices(packs).saved() > LEAST_SAVED;
}

class Prices {
  readonly #packs: Packs;
  readonly #readers: Readers;
  /** Per state bit its node, or -1. */
  readonly #stateNode: Int32Array;

  constructor(packs: Packs) {
    this.#packs = packs;
    this.#readers = readersOf(packs.logic);
    const { logic } = packs;
    this.#stateNode = new Int32Array(logic.states.length).fill(-1);
    for (let node = 1; node < logic.nodeCount; node++) {
      if (logic.op[node] === LogicOp.State) this.#stateNode[logic.a[node]!] = node;
    }
  }

  /** The part of the graph's cost that its packs save. */
  saved(): number {
    let plain = 0;
    let packed = 0;
    const { logic } = this.#packs;
    for (let node = 1; node < logic.nodeCount; node++) {
      const op = logic.op[node]!;
      if (op === LogicOp.Zero || op === LogicOp.Input) continue;
      const cost = this.#bitCost(op, node);
      plain += cost;
      if (!this.#packs.isPacked(node)) packed += cost;
      else if (op >= LogicOp.And && this.#readsOf(node).single) packed += Cost.lane;
    }
    const tuples = new Set<string>();
    for (const [, pack] of this.#packs.standing()) {
      packed += this.#operationCost(pack);
      for (const tuple of pack.operands) {
        const key = tuple.join();
        if (!tuples.has(key)) packed += this.tupleCost(tuple);
        tuples.add(key);
      }
    }
    return 1 - packed / plain;
  }

  /** What a pack saves, less what it costs. */
  gain(number: number, pack: Pack): number {
    let gain = -this.#operationCost(pack);
    for (const tuple of pack.operands)
      gain += this.#laneCost(tuple, number) - this.tupleCost(tuple);
    let isRead = false;
    for (const node of pack.nodes) {
      if (node === NO_NODE) continue;
      gain += this.#bitCost(pack.op, node);
      const reads = this.#readsOf(node);
      if (reads.single) gain -= Cost.lane;
      if (reads.single) isRead = true;
      // Packs that read it would have to gather it.
      if (reads.packed) gain += pack.op === LogicOp.State ? Cost.copy : Cost.gather;
    }
    return isRead && pack.op !== LogicOp.State ? gain - Cost.store : gain;
  }

  #operationCost(pack: Pack): number {
    if (pack.op === LogicOp.State) return Cost.store;
    return pack.op === LogicOp.Mux ? Cost.vectorMux : Cost.vector;
  }

  // What one lane costs outside a pack.
  #bitCost(op: number, node: number): number {
    if (op === LogicOp.Mux) return Cost.mux;
    if (op !== LogicOp.State) return Cost.bit;
    const { logic } = this.#packs;
    const next = nodeOf(logic.next[logic.a[node]!]!);
    return logic.op[next]! < LogicOp.And ? Cost.copy : Cost.store;
  }

  // What the lanes of a tuple would cost if they were read one by one.
  #laneCost(tuple: Tuple, reader: number): number {
    if (this.#packs.get(reader)?.op === LogicOp.State) return 0;
    let cost = 0;
    for (const [, literal] of lanesOf(tuple)) {
      const node = nodeOf(literal);
      if (this.#packs.isPacked(node) && !this.#readsOf(node).single) cost += Cost.lane;
    }
    return cost;
  }

  /** What it costs to bring the literals of a tuple together. */
  tupleCost(tuple: Tuple): number {
    const { packOf, laneOf, logic } = this.#packs;
    const sources = new Set<number>();
    let inPlace = true;
    let cost = 0;
    const isOne = isOneNode(tuple);
    for (const [lane, literal] of lanesOf(tuple)) {
      const node = nodeOf(literal);
      if (packOf[node]! >= 0) {
        sources.add(packOf[node]!);
        if (laneOf[node] !== lane) inPlace = false;
      } else if (isOne) return node === 0 ? 0 : Cost.splat;
      else if (node === 0) sources.add(-3);
      else if (logic.op[node] === LogicOp.Input) {
        if (!sources.has(-2)) cost += Cost.inputs;
        sources.add(-2);
      } else {
        if (!sources.has(-1)) cost += Cost.stall;
        sources.add(-1);
        cost += logic.op[node] === LogicOp.State ? Cost.copy : Cost.gather;
      }
    }
    if (sources.size <= 1) return inPlace ? cost : cost + Cost.permute;
    return cost + (sources.size - 1) * Cost.join;
  }

  #readsOf(node: number): { single: boolean; packed: boolean } {
    const { start, reader } = this.#readers;
    const { nodeCount } = this.#packs.logic;
    let single = false;
    let packed = false;
    for (let i = start[node]!; i < start[node + 1]!; i++) {
      const by = reader[i]!;
      const place = by < nodeCount ? by : (this.#stateNode[by - nodeCount] ?? -1);
      // Outputs are packed always.
      if (by === nodeCount + this.#stateNode.length) packed = true;
      else if (place >= 0 && this.#packs.isPacked(place)) packed = true;
      else single = true;
    }
    return { single, packed };
  }
}
