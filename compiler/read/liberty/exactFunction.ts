import type { NetId } from '../../circuit/ids.js';
import { type TruthTable, truthTable } from '../verilog/elaborate/truthTable.js';
import type { Expression } from './expression.js';

/** A function of several nets by its column of values. */
export interface ExactFunction {
  readonly table: TruthTable;
  readonly inputs: readonly NetId[];
}

/** Functions of more pins are built as they are written. */
const MOST_INPUTS = 8;

/**
 * The table of a function that names a net more than once; undefined for any other.
 *
 * What counts is the function and not how it is written: `(A * !S) + (B * S)` with A and B at 1 is
 * 1 whatever S is, but gates after that text would give x where S is x. The expansion of a table
 * is exact, as are the gates of a text that names each net once.
 */
export function exactFunction(
  expression: Expression,
  netOf: (name: string) => NetId,
): ExactFunction | undefined {
  const names = namesIn(expression);
  const nets = names.map(netOf);
  const inputs = [...new Set(nets)];
  if (inputs.length === nets.length || inputs.length > MOST_INPUTS) return undefined;
  const places = new Map(names.map((name, i) => [name, inputs.indexOf(nets[i]!)]));
  const table = truthTable(
    inputs.length,
    (levels) => levelOf(expression, (name) => (levels >> places.get(name)!) & 1) === 1,
  );
  return { table, inputs };
}

function namesIn(expression: Expression): string[] {
  switch (expression.kind) {
    case 'name':
      return [expression.name];
    case 'constant':
      return [];
    case 'not':
      return namesIn(expression.operand);
    default:
      return expression.operands.flatMap(namesIn);
  }
}

function levelOf(expression: Expression, given: (name: string) => number): number {
  switch (expression.kind) {
    case 'name':
      return given(expression.name);
    case 'constant':
      return expression.value;
    case 'not':
      return 1 - levelOf(expression.operand, given);
    default: {
      const values = expression.operands.map((operand) => levelOf(operand, given));
      if (expression.kind === 'and') return Math.min(...values);
      if (expression.kind === 'or') return Math.max(...values);
      return values.reduce((sum, value) => sum ^ value, 0);
    }
  }
}
