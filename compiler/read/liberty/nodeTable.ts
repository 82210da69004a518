import { Leaf } from '../../circuit/tables/diagram.js';
import type { Outcome, SequentialTable } from '../verilog/elaborate/primitiveTable.js';
import type { NextSymbol, StateRow } from './stateTable.js';

// Outcomes by the number they are kept as.
const outcomes: readonly Outcome[] = ['0', '1', '-', 'x'];
const outcomeOf: Readonly<Record<Exclude<NextSymbol, '-'>, number>> = { L: 0, H: 1, N: 2, X: 3 };
const UNKNOWN = 3;
const leaves: readonly number[] = [Leaf.Zero, Leaf.One, Leaf.Hold, Leaf.Unknown];

/**
 * The columns that a node depends on, besides itself: indices into the inputs of the table and
 * then all its nodes.
 */
export function columnsOf(rows: readonly StateRow[], node: number): number[] {
  const used = new Set<number>();
  for (const { inputs, current, next } of rows) {
    if (next[node] === '-') continue;
    for (const [column, symbol] of [...inputs, ...current].entries()) {
      if (symbol !== '-' && column !== inputs.length + node) used.add(column);
    }
  }
  return [...used].sort((a, b) => a - b);
}

/**
 * One node of a state table, worked out for every change of one input at every combination of
 * levels: the first row that matches and says something of the node decides (as common practice
 * has it, from memory); without one it becomes unknown.
 *
 * Its inputs are the columns that `columnsOf` gives.
 */
export class NodeTable implements SequentialTable {
  readonly inputs: number;
  // Outcome of a change of input i, at ((i << inputs) | levels) * 2 + state.
  readonly #events: Uint8Array;

  constructor(rows: readonly StateRow[], node: number) {
    const columns = columnsOf(rows, node);
    this.inputs = columns.length;
    const masked = rows.map((row) => maskedRow(row, columns, node));
    this.#events = new Uint8Array(this.inputs * 2 ** (this.inputs + 1));
    for (let at = 0; at < this.#events.length; at++) {
      const levels = (at >> 1) & ((1 << this.inputs) - 1);
      this.#events[at] = outcomeAt(masked, at >> (this.inputs + 1), levels, at & 1);
    }
  }

  /** The `Leaf` of what `event` tells. */
  readonly leaf = (input: number, levels: number, state: number): number =>
    leaves[this.#at(input, levels, state)]!;

  event(input: number, levels: number, state: number): Outcome {
    return outcomes[this.#at(input, levels, state)]!;
  }

  /** What the levels give whichever input has changed; undefined if that makes a difference. */
  level(levels: number, state: number): Outcome | undefined {
    const first = this.#valueAt(0, levels, state);
    for (let input = 1; input < this.inputs; input++) {
      if (this.#valueAt(input, levels, state) !== first) return undefined;
    }
    return outcomes[first];
  }

  #at(input: number, levels: number, state: number): number {
    return this.#events[((input << this.inputs) | levels) * 2 + state]!;
  }

  #valueAt(input: number, levels: number, state: number): number {
    const outcome = this.#at(input, levels, state);
    return outcome === outcomeOf.N ? state : outcome;
  }
}

interface MaskedRow {
  /** Levels that match: the bits of `mask` are compared with those of `levels`. */
  readonly mask: number;
  readonly levels: number;
  /** Inputs that must (not) be the one that changed, as bits by its new level. */
  readonly rising: number;
  readonly falling: number;
  readonly notRising: number;
  readonly notFalling: number;
  readonly state: 'L' | 'H' | '-';
  readonly outcome: number;
}

/** The row as bits; undefined where it says nothing of the node. */
function maskedRow(row: StateRow, columns: readonly number[], node: number): MaskedRow | undefined {
  const next = row.next[node]!;
  if (next === '-') return undefined;
  const all = [...row.inputs, ...row.current];
  const symbols = columns.map((column) => all[column]!);
  const bits = (symbol: (typeof all)[number]): number =>
    symbols.reduce((sum, each, input) => (each === symbol ? sum | (1 << input) : sum), 0);
  return {
    mask: bits('L') | bits('H'),
    levels: bits('H'),
    rising: bits('R'),
    falling: bits('F'),
    notRising: bits('~R'),
    notFalling: bits('~F'),
    state: row.current[node]!,
    outcome: outcomeOf[next],
  };
}

function outcomeAt(
  rows: readonly (MaskedRow | undefined)[],
  input: number,
  levels: number,
  state: number,
): number {
  const changed = 1 << input;
  const rose = levels & changed;
  const fell = changed & ~levels;
  const row = rows.find(
    (each) =>
      each !== undefined &&
      (levels & each.mask) === each.levels &&
      (each.state === '-' || (each.state === 'H') === (state === 1)) &&
      (each.rising & ~rose) === 0 &&
      (each.falling & ~fell) === 0 &&
      (each.notRising & rose) === 0 &&
      (each.notFalling & fell) === 0,
  );
  return row?.outcome ?? UNKNOWN;
}
