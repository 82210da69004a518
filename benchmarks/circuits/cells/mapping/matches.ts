import { areaOf, type LogicCell, pinNames } from '../cell.js';
import { truthTable } from '../expression.js';
import { logicCells } from '../logicCells.js';

/** A cell that computes a function: pin i of `pins` takes input i. */
export interface Match {
  readonly family: string;
  readonly output: string;
  readonly pins: readonly string[];
  readonly area: number;
}

/** The most inputs that a cell has. */
export const mostInputs = 6;

const families = new Map<string, LogicCell[]>();
for (const cell of logicCells) {
  families.set(cell.family, [...(families.get(cell.family) ?? []), cell]);
}

const keyOf = (table: bigint, count: number): string => `${count}:${table.toString(36)}`;

const forClocksAlone = /^clock_|^delay_/;
const matches = new Map<string, Match>();
for (const [smallest] of families.values()) addMatches(smallest!);

function addMatches(cell: LogicCell): void {
  const pins = pinNames(cell, 'input');
  const [only, ...others] = cell.functions;
  if (others.length > 0 || forClocksAlone.test(cell.family)) return;
  const area = areaOf(cell);
  for (const order of permutations(pins)) {
    const key = keyOf(truthTable(only!.is, order), pins.length);
    const known = matches.get(key);
    if (known !== undefined && known.area <= area) continue;
    matches.set(key, { family: cell.family, output: only!.pin, pins: order, area });
  }
}

function permutations(items: readonly string[]): (readonly string[])[] {
  if (items.length < 2) return [items];
  return items.flatMap((item, i) =>
    permutations(items.toSpliced(i, 1)).map((rest) => [item, ...rest]),
  );
}

/** The smallest cell for a truth table; undefined if there is none. */
export function matchOf(table: bigint, inputs: number): Match | undefined {
  return matches.get(keyOf(table, inputs));
}

/** The cell of a family whose drive suits a number of readers. */
export function cellFor(family: string, readers: number): LogicCell {
  const drives = families.get(family)!;
  return drives.find(({ drive }) => drive * 5 >= readers) ?? drives.at(-1)!;
}
