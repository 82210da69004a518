import type { Lists } from '../../circuit/lists.js';
import { LogicOp, nodeOf } from '../../logic/logic.js';
import { stateNodes } from '../../logic/stateNodes.js';
import { Cost } from './cost.js';
import { isOneNode, lanesOf, NO_NODE, type Pack, type Packs, type Tuple } from './packs.js';
import { readersOf } from './readers.js';
import { SumPrices } from './sumPrices.js';

/** The part of a graph's cost that its packs save. */
export const savedPart = (packs: Packs): number => new Prices(packs).saved();

/** What the packs of a graph cost and save. */
export class Prices {
  readonly #packs: Packs;
  readonly #readers: Lists;
  /** Per state bit its node, or -1. */
  readonly #stateNode: Int32Array;
  readonly #sums: SumPrices;

  constructor(packs: Packs) {
    this.#packs = packs;
    this.#readers = readersOf(packs);
    this.#sums = new SumPrices(packs, this.#readers, (node) => this.#bitCost(node));
    this.#stateNode = stateNodes(packs.logic);
  }

  /** The part of the graph's cost that its packs save. */
  saved(): number {
    let plain = 0;
    let packed = 0;
    const { logic } = this.#packs;
    for (let node = 1; node < logic.nodeCount; node++) {
      const op = logic.op[node]!;
      if (op === LogicOp.Zero || op === LogicOp.Input) continue;
      const cost = this.#bitCost(node);
      plain += cost;
      if (this.#packs.isDead[node] === 1) continue;
      if (!this.#packs.isPacked(node)) packed += cost;
      else if (op >= LogicOp.And && this.#readsOf(node).single) packed += Cost.lane;
    }
    const tuples = new Set<string>();
    for (const [number, pack] of this.#packs.standing()) {
      packed += this.#operationCost(number, pack);
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
    const { sum } = pack;
    if (sum === undefined) return this.#ownGain(number, pack) - this.#operandCost(number, pack);
    // All bits of a sum stand or fall together.
    const packs = this.#packs.packsOfAddition[sum.addition]!;
    const gains = packs.map((each) => this.#ownGain(each, this.#packs.get(each)!));
    const spared = this.#sums.spared(sum.addition);
    return gains.reduce((total, gain) => total + gain, spared) - this.#operandCost(number, pack);
  }

  // What it costs to bring together what a pack reads, less what else it would cost to read that.
  #operandCost(number: number, pack: Pack): number {
    let cost = 0;
    for (const tuple of pack.operands)
      cost += this.tupleCost(tuple) - this.#laneCost(tuple, number);
    return cost;
  }

  #ownGain(number: number, pack: Pack): number {
    let gain = -this.#operationCost(number, pack);
    let isRead = false;
    for (const node of pack.nodes) {
      if (node === NO_NODE) continue;
      gain += this.#bitCost(node);
      const reads = this.#readsOf(node);
      if (reads.single) gain -= Cost.lane;
      if (reads.single) isRead = true;
      // Packs that read it would have to gather it.
      if (reads.packed) gain += pack.op === LogicOp.State ? Cost.copy : Cost.gather;
    }
    return isRead && pack.op !== LogicOp.State ? gain - Cost.store : gain;
  }

  #operationCost(number: number, pack: Pack): number {
    if (pack.sum !== undefined) return this.#sums.cost(number, pack);
    if (pack.op === LogicOp.State) return Cost.store;
    return pack.op === LogicOp.Mux ? Cost.vectorMux : Cost.vector;
  }

  // What one lane costs outside a pack.
  #bitCost(node: number): number {
    const op = this.#packs.logic.op[node]!;
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
    const { start, members } = this.#readers;
    const { nodeCount } = this.#packs.logic;
    let single = false;
    let packed = false;
    for (let i = start[node]!; i < start[node + 1]!; i++) {
      const by = members[i]!;
      const place = by < nodeCount ? by : (this.#stateNode[by - nodeCount] ?? -1);
      // Outputs are packed always.
      if (by === nodeCount + this.#stateNode.length) packed = true;
      else if (place >= 0 && this.#packs.isPacked(place)) packed = true;
      else single = true;
    }
    return { single, packed };
  }
}
