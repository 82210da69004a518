import type { Cell } from './cell.js';
import { logicCells } from './logicCells.js';
import { physicalCells, triStateCells } from './physicalCells.js';
import { clockGateCells, flopCells, latchCells } from './sequentialCells.js';

/** All cells of the library. */
export const cells: readonly Cell[] = [
  ...logicCells,
  ...triStateCells,
  ...flopCells,
  ...latchCells,
  ...clockGateCells,
  ...physicalCells,
];

const byName = new Map(cells.map((cell) => [cell.name, cell]));

/** The cell of a name. Throws a RangeError for an unknown one. */
export function cellNamed(name: string): Cell {
  const cell = byName.get(name);
  if (cell === undefined) throw new RangeError(`the library has no cell ${name}`);
  return cell;
}
