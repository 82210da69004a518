import { type Diagram, Leaf } from './diagram.js';

/** A row of a table, as masks: bit v of a mask is set where value v (0, 1, or 2 for x) matches. */
export interface TableRow {
  /** Per input; without meaning at the input of the edge. */
  readonly levels: readonly number[];
  /** The input that must have changed, or -1. */
  readonly edge: number;
  /** For each value of that input before its change, the values after it that match. */
  readonly changes: readonly number[];
  /** The state before; all values for a table without state. */
  readonly state: number;
  /** A `Leaf`. */
  readonly outcome: number;
}

/** All three values, as a mask. */
export const ANY = 7;

/** Numbers of the variables of a table's diagrams: its inputs come first. */
export const beforeOf = (inputs: number): number => inputs;
export const stateOf = (inputs: number): number => inputs + 1;

/**
 * What the rows of a table say (IEEE 1364-2005, clause 8): rows without edge dominate, of the
 * others the first that matches decides, and where none does the outcome is x.
 */
export class RowDiagrams {
  readonly #diagram: Diagram;
  readonly #order: readonly number[];
  readonly #inputs: number;
  readonly #rows: readonly TableRow[];

  /** `order` is that of the diagram: the inputs, the value before a change, the state. */
  constructor(
    diagram: Diagram,
    order: readonly number[],
    inputs: number,
    rows: readonly TableRow[],
  ) {
    this.#diagram = diagram;
    this.#order = order;
    this.#inputs = inputs;
    this.#rows = [...rows.filter(({ edge }) => edge < 0), ...rows.filter(({ edge }) => edge >= 0)];
  }

  /** The function of the levels of a table without state. */
  levels(): number {
    return this.#grow(-1);
  }

  /** The function of a change of one input; no change where it has its value before. */
  event(input: number): number {
    return this.#grow(input);
  }

  #grow(input: number): number {
    const before = beforeOf(this.#inputs);
    const known = new Map<string, number>();
    const build = (place: number, open: readonly number[], now: number): number => {
      if (place === this.#order.length) return this.#leaf(open[0]);
      const key = `${place} ${now} ${open.join()}`;
      const seen = known.get(key);
      if (seen !== undefined) return seen;
      const variable = this.#order[place]!;
      const at = (value: number): number => {
        if (variable === before && value === now) return Leaf.Hold;
        const rest = open.filter((row) => this.#matches(row, variable, value, input, now));
        return build(place + 1, rest, variable === input ? value : now);
      };
      const third = this.#diagram.values === 3 ? at(2) : 0;
      const made = this.#diagram.node(variable, at(0), at(1), third);
      known.set(key, made);
      return made;
    };
    const own = [...this.#rows.keys()].filter((row) => {
      const { edge } = this.#rows[row]!;
      return edge < 0 || edge === input;
    });
    return build(0, own, -1);
  }

  #leaf(row: number | undefined): number {
    const outcome = row === undefined ? Leaf.Unknown : this.#rows[row]!.outcome;
    return this.#diagram.values === 2 && outcome === Leaf.Unknown ? Leaf.Zero : outcome;
  }

  #matches(row: number, variable: number, value: number, input: number, now: number): boolean {
    const { levels, edge, changes, state } = this.#rows[row]!;
    const includes = (mask: number, each: number): boolean => ((mask >> each) & 1) === 1;
    if (variable === stateOf(this.#inputs)) return includes(state, value);
    if (variable === beforeOf(this.#inputs)) return edge < 0 || includes(changes[value]!, now);
    if (variable !== input || edge < 0) return includes(levels[variable]!, value);
    return changes.some((after) => includes(after, value));
  }
}
