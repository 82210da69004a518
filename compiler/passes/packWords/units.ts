import { TarjanSearch } from '../../circuit/tarjan.js';
import { type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { LANES, lanesOf, type Packs } from './packs.js';

/** Passes over the graph to break circles; each takes one pack out of every circle. */
const MOST_ROUNDS = 64;

/**
 * Dissolves packs until none needs, over other packs or single operations, what it computes itself.
 *
 * Takes the pack of the fewest nodes out of each strongly connected part.
 */
export function breakCircles(packs: Packs): void {
  for (let round = 0; ; round++) {
    const circles = circlesOf(packs);
    if (circles.length === 0) return;
    for (const circle of circles) {
      const sizes = circle
        .filter((unit) => unit >= packs.logic.nodeCount)
        .map((unit) => ({ pack: unit - packs.logic.nodeCount, size: sizeOf(packs, unit) }));
      sizes.sort((p, q) => p.size - q.size);
      // Past the last round no circle may be left.
      const taken = round < MOST_ROUNDS ? sizes.slice(0, Math.ceil(sizes.length / 8)) : sizes;
      for (const { pack } of taken) packs.dissolve(pack);
    }
  }
}

function sizeOf(packs: Packs, unit: number): number {
  const pack = packs.get(unit - packs.logic.nodeCount)!;
  return pack.nodes.reduce((size, node) => size + Number(node >= 0), 0);
}

// Units are nodes, and packs numbered behind the nodes.
function circlesOf(packs: Packs): readonly number[][] {
  const { logic } = packs;
  const search = new TarjanSearch(logic.nodeCount + packs.count, (unit, i) => {
    if (unit < logic.nodeCount) {
      if (packs.isPacked(unit) || i >= operandsOf(logic, unit)) return -1;
      return unitOf(packs, operand(logic, unit, i));
    }
    const pack = packs.get(unit - logic.nodeCount);
    if (pack === undefined || pack.op === LogicOp.State || i >= pack.operands.length * LANES) {
      return -1;
    }
    const literal = pack.operands[Math.floor(i / LANES)]![i % LANES]!;
    // Node 0 is a successor without successors of its own.
    return literal < 0 ? 0 : unitOf(packs, literal);
  });
  return search.components();
}

function unitOf({ logic, packOf }: Packs, literal: Literal): number {
  const node = nodeOf(literal);
  return packOf[node]! >= 0 ? logic.nodeCount + packOf[node]! : node;
}

const operandsOf = ({ op }: Logic, node: number): number =>
  op[node]! < LogicOp.And ? 0 : op[node] === LogicOp.Mux ? 3 : 2;

const operand = ({ a, b, c }: Logic, node: number, i: number): Literal =>
  (i === 0 ? a : i === 1 ? b : c)[node]!;

/** When things are computed: scalar code of stage s, vectors of stage s, scalar code of stage s + 1. */
export interface Stages {
  readonly ofNode: Uint16Array;
  readonly ofPack: Uint16Array;
  readonly count: number;
  /** The packs in an order in which each stands behind those that it needs. */
  readonly packOrder: readonly number[];
}

/** The earliest stage of each operation and pack; there must be no circles. */
export function stagesOf(packs: Packs): Stages {
  const staging = new Staging(packs);
  for (let node = 1; node < packs.logic.nodeCount; node++) {
    if (packs.isDead[node] === 0) staging.visit(node);
  }
  const count = 1 + Math.max(staging.ofNode.reduce(max, 0), staging.ofPack.reduce(max, 0));
  const { ofNode, ofPack, packOrder } = staging;
  return { ofNode, ofPack, count, packOrder };
}

const max = (p: number, q: number): number => Math.max(p, q);

class Staging {
  readonly ofNode: Uint16Array;
  readonly ofPack: Uint16Array;
  readonly packOrder: number[] = [];
  readonly #packs: Packs;
  readonly #nodeDone: Uint8Array;
  readonly #packDone: Uint8Array;
  readonly #stack: number[] = [];

  constructor(packs: Packs) {
    this.#packs = packs;
    this.ofNode = new Uint16Array(packs.logic.nodeCount);
    this.ofPack = new Uint16Array(packs.count);
    this.#nodeDone = new Uint8Array(packs.logic.nodeCount);
    this.#packDone = new Uint8Array(packs.count);
  }

  /** Finds the stages of a node and of all that it needs. */
  visit(root: number): void {
    this.#stack.push(root);
    for (let node = this.#stack.at(-1); node !== undefined; node = this.#stack.at(-1)) {
      const pack = this.#packs.packOf[node]!;
      const isDone = pack >= 0 ? this.#finishPack(pack) : this.#finishNode(node);
      if (isDone) this.#stack.pop();
    }
  }

  #finishNode(node: number): boolean {
    if (this.#nodeDone[node] === 1) return true;
    const { logic } = this.#packs;
    let stage = 0;
    let isReady = true;
    for (let i = 0; i < operandsOf(logic, node); i++) {
      const below = nodeOf(operand(logic, node, i));
      if (!this.#isDone(below)) {
        this.#stack.push(below);
        isReady = false;
      }
      stage = Math.max(stage, this.#before(below) + Number(this.#isComputedPack(below)));
    }
    if (!isReady) return false;
    this.ofNode[node] = stage;
    this.#nodeDone[node] = 1;
    return true;
  }

  #finishPack(number: number): boolean {
    if (this.#packDone[number] === 1) return true;
    const pack = this.#packs.get(number)!;
    let stage = 0;
    let isReady = true;
    for (const tuple of pack.op === LogicOp.State ? [] : pack.operands) {
      for (const [, literal] of lanesOf(tuple)) {
        const below = nodeOf(literal);
        if (!this.#isDone(below)) {
          this.#stack.push(below);
          isReady = false;
        }
        stage = Math.max(stage, this.#before(below));
      }
    }
    if (!isReady) return false;
    this.ofPack[number] = stage;
    this.#packDone[number] = 1;
    this.packOrder.push(number);
    return true;
  }

  #isDone(node: number): boolean {
    const pack = this.#packs.packOf[node]!;
    return (pack >= 0 ? this.#packDone[pack] : this.#nodeDone[node]) === 1;
  }

  #before(node: number): number {
    const pack = this.#packs.packOf[node]!;
    return pack >= 0 ? this.ofPack[pack]! : this.ofNode[node]!;
  }

  // The state stands in memory from the start.
  #isComputedPack(node: number): boolean {
    const pack = this.#packs.packOf[node]!;
    return pack >= 0 && this.#packs.get(pack)!.op !== LogicOp.State;
  }
}
