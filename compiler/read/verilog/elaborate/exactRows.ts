import { Leaf } from '../../../circuit/tables/diagram.js';
import { ANY, type TableRow } from '../../../circuit/tables/tableRows.js';
import type { PrimitiveRow } from '../syntax.js';

// Bit v is set where value v (0, 1, or 2 for x) matches.
const levelMasks: Readonly<Record<string, number>> = { '0': 1, '1': 2, x: 4, '?': ANY, b: 3 };

/** The values after a change that match, for each value before it. */
type Changes = readonly [fromZero: number, fromOne: number, fromX: number];

const letters: Readonly<Record<string, Changes>> = {
  r: [2, 0, 0],
  f: [0, 1, 0],
  p: [2 | 4, 0, 2],
  n: [0, 1 | 4, 1],
  '*': [2 | 4, 1 | 4, 1 | 2],
};

const outcomes: Readonly<Record<string, number>> = {
  '0': Leaf.Zero,
  '1': Leaf.One,
  x: Leaf.Unknown,
  '-': Leaf.Hold,
};

/** The rows of a primitive's table with all that they say of x (IEEE 1364-2005, clause 8.1.6). */
export const exactRows = (rows: readonly PrimitiveRow[]): TableRow[] =>
  rows.map(({ inputs, state, output }) => {
    const edge = inputs.findIndex((symbol) => levelMasks[symbol] === undefined);
    return {
      levels: inputs.map((symbol) => levelMasks[symbol] ?? ANY),
      edge,
      changes: edge < 0 ? [] : changesOf(inputs[edge]!),
      state: state === undefined ? ANY : levelMasks[state]!,
      outcome: outcomes[output]!,
    };
  });

/** Of an edge symbol, or of a pair such as `(01)` or `(?1)`; no value changes to itself. */
function changesOf(symbol: string): Changes {
  const known = letters[symbol];
  if (known !== undefined) return known;
  const from = levelMasks[symbol[1]!]!;
  const to = levelMasks[symbol[2]!]!;
  const after = (value: number): number => (((from >> value) & 1) === 1 ? to & ~(1 << value) : 0);
  return [after(0), after(1), after(2)];
}
