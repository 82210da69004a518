import { type Literal, LogicOp, nodeOf } from './logic.js';
import type { LogicBuilder } from './logicBuilder.js';

/** Most nodes that the two literals may be traced back to, of which all combinations are tried. */
const MOST_LEAVES = 12;
/** Beyond so many the window will hardly become narrow again. */
const WIDEST = MOST_LEAVES + 4;
/** Most nodes of a window. */
const MOST_NODES = 100;
/** Windows are tried at so many nodes and each time they have grown by half. */
const FIRST_TRIAL = 3;

/** Columns of the first five leaves: all 32 combinations of them in the bits of a word. */
const COLUMNS = [0xaaaaaaaa, 0xcccccccc, 0xf0f0f0f0, 0xff00ff00, 0xffff0000];

/**
 * Proves literals equal by a window: the operations just above them, back to a few nodes for which
 * all combinations are tried. Equal for all of these is equal whatever the nodes compute; a window
 * that shows a difference says nothing, and a larger one is tried.
 */
export class WindowProof {
  readonly #logic: LogicBuilder;
  /** Values of 32 combinations that may still be computed, or leaves looked at. */
  #budget: number;

  constructor(logic: LogicBuilder, budget: number) {
    this.#logic = logic;
    this.#budget = budget;
  }

  /** Whether two literals are always equal; false also where that is too much to try out. */
  areEqual(left: Literal, right: Literal): boolean {
    const leaves = new Set([nodeOf(left), nodeOf(right)]);
    leaves.delete(0);
    const nodes: number[] = [];
    let trial = FIRST_TRIAL;
    while (nodes.length < MOST_NODES && leaves.size <= WIDEST && this.#budget > 0) {
      const top = this.#topOf(leaves);
      if (top < 0) break;
      this.#budget -= leaves.size;
      leaves.delete(top);
      nodes.push(top);
      for (const operand of this.#operands(top)) if (operand !== 0) leaves.add(operand);
      if (nodes.length < trial || leaves.size > MOST_LEAVES) continue;
      if (this.#holds(left, right, leaves, nodes)) return true;
      trial = Math.ceil(nodes.length * 1.5);
    }
    return leaves.size <= MOST_LEAVES && this.#holds(left, right, leaves, nodes);
  }

  // The operation among the leaves that was made last: no other one depends on it.
  #topOf(leaves: ReadonlySet<number>): number {
    let top = -1;
    for (const leaf of leaves) if (leaf > top && this.#isOperation(leaf)) top = leaf;
    return top;
  }

  #isOperation(node: number): boolean {
    const op = this.#logic.op(node);
    return op >= LogicOp.And && op <= LogicOp.Mux;
  }

  #operands(node: number): number[] {
    const count = this.#logic.op(node) === LogicOp.Mux ? 3 : 2;
    return ([0, 1, 2] as const)
      .slice(0, count)
      .map((which) => nodeOf(this.#logic.operand(node, which)));
  }

  #holds(
    left: Literal,
    right: Literal,
    leaves: ReadonlySet<number>,
    nodes: readonly number[],
  ): boolean {
    const words = 1 << Math.max(0, leaves.size - COLUMNS.length);
    this.#budget -= words * nodes.length;
    const values = new Map<number, Int32Array>([[0, new Int32Array(words)]]);
    for (const [place, leaf] of [...leaves].entries()) values.set(leaf, column(place, words));
    // They were listed from the last one made to the first.
    for (const node of nodes.toReversed()) values.set(node, this.#evaluate(node, values, words));
    const [p, q] = [values.get(nodeOf(left))!, values.get(nodeOf(right))!];
    const inverted = -((left ^ right) & 1);
    return p.every((word, i) => word === (q[i]! ^ inverted));
  }

  #evaluate(node: number, values: ReadonlyMap<number, Int32Array>, words: number): Int32Array {
    const op = this.#logic.op(node);
    const result = new Int32Array(words);
    const [a, b, c] = ([0, 1, 2] as const).map((which) => this.#logic.operand(node, which)) as [
      Literal,
      Literal,
      Literal,
    ];
    const [p, q] = [values.get(nodeOf(a))!, values.get(nodeOf(b))!];
    const [turnP, turnQ, turnR] = [-(a & 1), -(b & 1), -(c & 1)];
    const r = op === LogicOp.Mux ? values.get(nodeOf(c))! : q;
    for (let i = 0; i < words; i++) {
      const first = p[i]! ^ turnP;
      const second = q[i]! ^ turnQ;
      if (op === LogicOp.And) result[i] = first & second;
      else if (op === LogicOp.Xor) result[i] = first ^ second;
      else result[i] = second ^ (first & (second ^ r[i]! ^ turnR));
    }
    return result;
  }
}

// The values of one leaf over all combinations of them, 32 in a word.
function column(place: number, words: number): Int32Array {
  const word = COLUMNS[place];
  const column = new Int32Array(words);
  if (word !== undefined) return column.fill(word);
  return column.map((_, i) => -((i >>> (place - COLUMNS.length)) & 1));
}
