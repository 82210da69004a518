import type { Value } from '../values.js';

/** What stands at the end of a way through a diagram; any greater number is a node. */
export const Leaf = { Zero: 0, One: 1, Unknown: 2, Hold: 3 } as const;

/** The leaf of no change: the state stays. */
const HOLD = Leaf.Hold;
const FIRST_NODE = 4;

/** A diagram as plain data, to be kept or sent elsewhere. */
export interface PlainDiagram {
  readonly order: readonly number[];
  readonly values: ValueCount;
  /** Per node. */
  readonly variable: readonly number[];
  /** Three per node. */
  readonly branches: readonly number[];
}

/** The values that a variable of a diagram can have: 0 and 1, or x (2) too. */
export type ValueCount = 2 | 3;

/**
 * Functions of a few variables with values 0, 1 and x, as decision diagrams: a node asks for one
 * variable and leads on by its value. Equal functions are the same number.
 *
 * After R. E. Bryant, "Graph-based algorithms for Boolean function manipulation", IEEE Trans.
 * Computers C-35(8), 1986, with three branches a node. In a diagram of two values the branch for x
 * is that for 0.
 */
export class Diagram {
  readonly values: ValueCount;
  /** The variable that is the state before, which the leaf `Hold` stands for. */
  readonly state: number;
  readonly #order: readonly number[];
  readonly #rank: Uint8Array;
  readonly #variable: number[] = [];
  readonly #branches: number[] = [];
  readonly #known = new Map<string, number>();

  /** `order` has all variables in the order in which they are asked for, the state last. */
  constructor(order: readonly number[], values: ValueCount) {
    this.values = values;
    this.#order = order;
    this.state = order.at(-1)!;
    this.#rank = new Uint8Array(order.length);
    for (const [rank, variable] of order.entries()) this.#rank[variable] = rank;
  }

  /** The diagram that `plain` was made of: the same numbers are the same functions. */
  static of({ order, values, variable, branches }: PlainDiagram): Diagram {
    const diagram = new Diagram(order, values);
    for (const [index, asked] of variable.entries()) {
      const [zero, one, unknown] = branches.slice(index * 3, index * 3 + 3);
      diagram.#add(asked, [zero!, one!, unknown!]);
    }
    return diagram;
  }

  plain(): PlainDiagram {
    return {
      ...{ order: this.#order, values: this.values },
      ...{ variable: this.#variable, branches: this.#branches },
    };
  }

  /** Whether a function still depends on something, its state before included. */
  isNode(ref: number): boolean {
    return ref >= FIRST_NODE;
  }

  /** The variable that a node asks for. */
  variable(node: number): number {
    return this.#variable[node - FIRST_NODE]!;
  }

  /** Whether one variable is asked for before another. */
  asksBefore(variable: number, other: number): boolean {
    return this.#rank[variable]! < this.#rank[other]!;
  }

  /** Where a node leads for a value of its variable. */
  branch(node: number, value: number): number {
    return this.#branches[(node - FIRST_NODE) * 3 + value]!;
  }

  /** The function that is `zero`, `one` or `unknown` as the variable says, which comes before theirs. */
  node(variable: number, zero: number, one: number, unknown: number): number {
    const branches = [zero, one, this.values === 3 ? unknown : zero];
    if (variable === this.state) {
      const holds = branches.every(
        (ref, value) => ref === HOLD || ref === value || this.#ends(value),
      );
      if (holds) return HOLD;
      for (const [value, ref] of branches.entries()) if (ref === HOLD) branches[value] = value;
      if (this.values === 2) branches[2] = branches[0]!;
    }
    if (branches.every((ref) => ref === branches[0])) return branches[0]!;
    return this.#known.get(keyOf(variable, branches)) ?? this.#add(variable, branches);
  }

  #add(variable: number, branches: readonly number[]): number {
    const made = this.#variable.push(variable) - 1 + FIRST_NODE;
    this.#branches.push(...branches);
    this.#known.set(keyOf(variable, branches), made);
    return made;
  }

  #ends(value: number): boolean {
    return value >= this.values;
  }

  /** The function that is the value of a variable. */
  valueOf(variable: number): number {
    return this.node(variable, Leaf.Zero, Leaf.One, Leaf.Unknown);
  }

  /** The function where a variable has a value. */
  restrict(ref: number, variable: number, value: number): number {
    const known = new Map<number, number>();
    const visit = (each: number): number => {
      if (!this.isNode(each)) {
        // No change of a known state is that state.
        return each === HOLD && variable === this.state ? value : each;
      }
      if (this.variable(each) === variable) return this.branch(each, value);
      if (this.asksBefore(variable, this.variable(each))) return each;
      const seen = known.get(each);
      if (seen !== undefined) return seen;
      const branches = [0, 1, 2].map((v) => visit(this.branch(each, v)));
      const made = this.node(this.variable(each), branches[0]!, branches[1]!, branches[2]!);
      known.set(each, made);
      return made;
    };
    return visit(ref);
  }

  /**
   * The function whose value follows from those of others, by `leaf`; leaves of no change are
   * resolved to the state before.
   */
  compose(refs: readonly number[], leaf: (values: readonly Value[]) => number): number {
    const known = new Map<string, number>();
    const visit = (each: readonly number[]): number => {
      const key = each.join();
      const seen = known.get(key);
      if (seen !== undefined) return seen;
      const made = this.#composed(each, visit, leaf);
      known.set(key, made);
      return made;
    };
    return visit(refs);
  }

  #composed(
    refs: readonly number[],
    visit: (refs: readonly number[]) => number,
    leaf: (values: readonly Value[]) => number,
  ): number {
    let first = -1;
    for (const ref of refs) {
      if (ref < HOLD) continue;
      const variable = ref === HOLD ? this.state : this.variable(ref);
      if (first < 0 || this.#rank[variable]! < this.#rank[first]!) first = variable;
    }
    if (first < 0) return leaf(refs as readonly Value[]);
    const at = (value: number): number => visit(refs.map((ref) => this.#step(ref, first, value)));
    return this.node(first, at(0), at(1), this.values === 3 ? at(2) : 0);
  }

  /** Where a function goes on if its first variable is the one given, else itself. */
  #step(ref: number, variable: number, value: number): number {
    if (ref === HOLD) return variable === this.state ? value : HOLD;
    return this.isNode(ref) && this.variable(ref) === variable ? this.branch(ref, value) : ref;
  }

  /** The variables that a function depends on; the state only where it is asked for by a node. */
  support(ref: number): Set<number> {
    const variables = new Set<number>();
    const seen = new Set<number>();
    const visit = (each: number): void => {
      if (!this.isNode(each) || seen.has(each)) return;
      seen.add(each);
      variables.add(this.variable(each));
      for (let value = 0; value < this.values; value++) visit(this.branch(each, value));
    };
    visit(ref);
    return variables;
  }

  /** The leaf that plain values of the variables lead to; never `Hold`. */
  walk(ref: number, valueAt: (variable: number) => number): number {
    let at = ref;
    while (this.isNode(at)) at = this.branch(at, valueAt(this.variable(at)));
    return at === HOLD ? valueAt(this.state) : at;
  }
}

const keyOf = (variable: number, branches: readonly number[]): string =>
  `${variable} ${branches.join(' ')}`;
