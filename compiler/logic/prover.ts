import { type Literal, LogicOp, nodeOf } from './logic.js';
import type { LogicBuilder } from './logicBuilder.js';

/** Most combinations of input and state bits that are tried out for one comparison. */
const MAX_COMBINATIONS = 1 << 15;
/** Most nodes that are looked at for one comparison. */
const MAX_NODES = 1000;
/** Operations on 32 combinations that all comparisons together may take. */
const BUDGET = 20_000_000;
/** Random combinations that are tried first: most literals that differ, differ there. */
const SAMPLE = 128;

/** The values that two bits can have together. */
type PairValues = readonly (readonly [number, number])[];

const NOT_BOTH_0: PairValues = [
  [0, 1],
  [1, 0],
  [1, 1],
];
const NOT_BOTH_1: PairValues = [
  [0, 0],
  [0, 1],
  [1, 0],
];

/** One bit, or two that are not independent, and the values that they can have. */
interface Variable {
  readonly nodes: readonly number[];
  readonly values: readonly (readonly number[])[];
}

/** Proves literals equal by trying out all combinations of the few bits that they depend on. */
export class Prover {
  readonly #logic: LogicBuilder;
  readonly #partner = new Map<number, { readonly node: number; readonly values: PairValues }>();
  readonly #known = new Map<string, boolean>();
  #spent = 0;

  constructor(logic: LogicBuilder) {
    this.#logic = logic;
  }

  /** Takes for granted that two input or state bits are never both 0. */
  assumeEither(a: Literal, b: Literal): void {
    this.#partner.set(nodeOf(a), { node: nodeOf(b), values: NOT_BOTH_0 });
  }

  /** Takes for granted that two input or state bits are never both 1. */
  assumeNotBoth(a: Literal, b: Literal): void {
    this.#partner.set(nodeOf(a), { node: nodeOf(b), values: NOT_BOTH_1 });
  }

  /** Whether two literals are always equal; false also where that is too much to try out. */
  areEqual(a: Literal, b: Literal): boolean {
    if (a === b) return true;
    const key = `${a} ${b}`;
    const known = this.#known.get(key);
    if (known !== undefined) return known;
    const proven = this.#prove(a, b);
    this.#known.set(key, proven);
    return proven;
  }

  #prove(a: Literal, b: Literal): boolean {
    const cone = this.#cone([nodeOf(a), nodeOf(b)]);
    if (cone === undefined) return false;
    const variables = this.#variables(cone);
    const count = variables.reduce((product, { values }) => product * values.length, 1);
    const differ = (columns: ReadonlyMap<number, Uint32Array>, words: number): boolean =>
      this.#differ(a, b, cone, columns, words);
    if (differ(columnsOf(variables, SAMPLE, random), SAMPLE / 32)) return false;
    const words = Math.ceil(count / 32);
    if (count > MAX_COMBINATIONS || this.#spent > BUDGET) return false;
    this.#spent += words * cone.length;
    return !differ(columnsOf(variables, count, eachInTurn), words);
  }

  /** The nodes that some depend on, operands first; undefined where they are too many. */
  #cone(roots: readonly number[]): number[] | undefined {
    const seen = new Set<number>();
    const pending = [...roots];
    for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
      if (seen.has(node)) continue;
      seen.add(node);
      if (seen.size > MAX_NODES) return undefined;
      if (this.#logic.op(node) === LogicOp.Zero || this.#isLeaf(node)) continue;
      pending.push(nodeOf(this.#logic.operand(node, 0)), nodeOf(this.#logic.operand(node, 1)));
      if (this.#logic.op(node) === LogicOp.Mux) pending.push(nodeOf(this.#logic.operand(node, 2)));
    }
    return [...seen].sort((a, b) => a - b);
  }

  // What memories give is taken for bits of their own.
  #isLeaf(node: number): boolean {
    const op = this.#logic.op(node);
    return op !== LogicOp.Zero && op !== LogicOp.And && op !== LogicOp.Xor && op !== LogicOp.Mux;
  }

  #variables(cone: readonly number[]): Variable[] {
    const open = new Set(cone.filter((node) => this.#isLeaf(node)));
    const variables: Variable[] = [];
    for (const node of open) {
      const partner = this.#partner.get(node);
      if (partner === undefined || !open.has(partner.node)) continue;
      variables.push({ nodes: [node, partner.node], values: partner.values });
      open.delete(node);
      open.delete(partner.node);
    }
    for (const node of open) variables.push({ nodes: [node], values: [[0], [1]] });
    return variables;
  }

  /** Whether literals differ for any of the combinations that the columns of the leaves hold. */
  #differ(
    a: Literal,
    b: Literal,
    cone: readonly number[],
    leaves: ReadonlyMap<number, Uint32Array>,
    words: number,
  ): boolean {
    const value = new Map(leaves);
    for (const node of cone) {
      if (!value.has(node)) value.set(node, this.#evaluate(node, value, words));
    }
    const left = value.get(nodeOf(a))!;
    const right = value.get(nodeOf(b))!;
    const inverted = ((a ^ b) & 1) === 1 ? -1 : 0;
    for (let word = 0; word < words; word++) {
      if ((left[word]! ^ right[word]! ^ inverted) !== 0) return true;
    }
    return false;
  }

  #evaluate(node: number, value: ReadonlyMap<number, Uint32Array>, words: number): Uint32Array {
    const op = this.#logic.op(node);
    const result = new Uint32Array(words);
    if (op === LogicOp.Zero) return result;
    const [a, b] = [this.#operand(node, 0, value), this.#operand(node, 1, value)];
    const c = op === LogicOp.Mux ? this.#operand(node, 2, value) : b;
    for (let i = 0; i < words; i++) {
      const first = a(i);
      if (op === LogicOp.And) result[i] = first & b(i);
      else if (op === LogicOp.Xor) result[i] = first ^ b(i);
      else result[i] = (~first & b(i)) | (first & c(i));
    }
    return result;
  }

  #operand(
    node: number,
    which: 0 | 1 | 2,
    value: ReadonlyMap<number, Uint32Array>,
  ): (word: number) => number {
    const literal = this.#logic.operand(node, which);
    const words = value.get(nodeOf(literal))!;
    return (literal & 1) === 1 ? (word) => ~words[word]! : (word) => words[word]!;
  }
}

/** Which of its values a variable has in a combination. */
type Choice = (combination: number, stride: number, values: number, place: number) => number;

const eachInTurn: Choice = (combination, stride, values) =>
  Math.floor(combination / stride) % values;

// Knuth's multiplicative hash of the place, twice.
const random: Choice = (combination, _, values, place) => {
  const hash = Math.imul(combination * 64 + place + 1, 0x9e3779b1);
  return (Math.imul(hash ^ (hash >>> 15), 0x85ebca6b) >>> 8) % values;
};

/** The values of all bits over some combinations, 32 of them in a word; the last one is repeated. */
function columnsOf(
  variables: readonly Variable[],
  count: number,
  choice: Choice,
): Map<number, Uint32Array> {
  const words = Math.ceil(count / 32);
  const columns = new Map<number, Uint32Array>();
  let stride = 1;
  for (const [place, { nodes, values }] of variables.entries()) {
    const own = nodes.map(() => new Uint32Array(words));
    for (let i = 0; i < words * 32; i++) {
      const chosen = values[choice(Math.min(i, count - 1), stride, values.length, place)]!;
      for (const [bit, column] of own.entries()) column[i >>> 5]! |= chosen[bit]! << (i & 31);
    }
    for (const [bit, node] of nodes.entries()) columns.set(node, own[bit]!);
    stride *= values.length;
  }
  return columns;
}
