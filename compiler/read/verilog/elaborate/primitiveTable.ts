import type { PrimitiveRow } from '../syntax.js';

/** What a table says of the output: a value, no change, or unknown. */
export type Outcome = '0' | '1' | '-' | 'x';

/** A row, as far as it can match where everything is 0 or 1. */
interface Row {
  /** Per input: bit 0 set if 0 matches, bit 1 if 1 does; at the edge's input the value after it. */
  readonly levels: readonly number[];
  /** The input with an edge symbol, or -1. */
  readonly edge: number;
  readonly state: number;
  readonly output: Outcome;
}

const levelMasks: Readonly<Record<string, number>> = { '0': 1, '1': 2, x: 0, '?': 3, b: 3 };

/** The two-valued edges of each symbol: 1 for one that falls, 2 for one that rises. */
const edgeMasks: Readonly<Record<string, number>> = { r: 2, p: 2, f: 1, n: 1, '*': 3 };

/** What a table with a state says, for inputs and states of 0 and 1; bit i of `levels` is input i. */
export interface SequentialTable {
  readonly inputs: number;
  /** The outcome that the levels give whichever input has changed, if they do. */
  level(levels: number, state: number): Outcome | undefined;
  /** The outcome of a change of one input, with the levels after it. */
  event(input: number, levels: number, state: number): Outcome;
}

/** The table of a primitive for inputs and states of 0 and 1 (IEEE 1364-2005, clause 8.1.4). */
export class PrimitiveTable implements SequentialTable {
  readonly inputs: number;
  readonly #levelRows: Row[] = [];
  readonly #edgeRows: Row[] = [];

  constructor(rows: readonly PrimitiveRow[], inputs: number) {
    this.inputs = inputs;
    for (const syntax of rows) {
      const row = rowOf(syntax);
      (row.edge < 0 ? this.#levelRows : this.#edgeRows).push(row);
    }
  }

  /** The outcome of the rows without edge, if one matches; bit i of `levels` is input i. */
  level(levels: number, state: number): Outcome | undefined {
    return find(this.#levelRows, levels, state, -1);
  }

  /**
   * The outcome of a change of one input, with the levels after it: rows without edge dominate
   * (clause 8.9), and where no row matches the output becomes x.
   */
  event(input: number, levels: number, state: number): Outcome {
    return this.level(levels, state) ?? find(this.#edgeRows, levels, state, input) ?? 'x';
  }
}

function rowOf({ inputs, state, output }: PrimitiveRow): Row {
  const edge = inputs.findIndex((symbol) => levelMasks[symbol] === undefined);
  return {
    levels: inputs.map((symbol) => levelMasks[symbol] ?? edgeMasks[symbol] ?? pairMask(symbol)),
    edge,
    state: state === undefined ? 3 : levelMasks[state]!,
    output: output as Outcome,
  };
}

/** The edges of a pair such as `(01)` or `(?1)`. */
function pairMask(symbol: string): number {
  const from = levelMasks[symbol[1]!]!;
  const to = levelMasks[symbol[2]!]!;
  return ((from & 2) !== 0 ? to & 1 : 0) | ((from & 1) !== 0 ? to & 2 : 0);
}

function find(rows: readonly Row[], levels: number, state: number, edge: number) {
  return rows.find((row) => {
    if (row.edge !== edge || ((row.state >> state) & 1) === 0) return false;
    return row.levels.every((mask, input) => ((mask >> ((levels >> input) & 1)) & 1) === 1);
  })?.output;
}
