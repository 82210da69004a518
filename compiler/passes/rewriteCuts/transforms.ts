import { invertVariable, swapVariables, type Table, VARIABLES } from './functions.js';

/**
 * A way to read a function with other variables: first some are inverted, then each is moved to a
 * place. With the inversion of the function itself, these are all changes that leave the cost of
 * computing it as it is.
 */
export interface Transform {
  /** Bit v is 1 where variable v is inverted. */
  readonly inverted: number;
  /** Variable at whose place each one then stands. */
  readonly place: readonly number[];
}

/** All of them. */
export const transforms: readonly Transform[] = orders([0, 1, 2, 3]).flatMap((place) =>
  Array.from({ length: 1 << VARIABLES }, (_, inverted) => ({ inverted, place })),
);

/** The function read that way. */
export function transformed(table: Table, { inverted, place }: Transform): Table {
  return moved(turned(table, inverted), place);
}

/**
 * Calls back with what becomes of a function by each of `transforms`, in their order, and soon: one
 * variable is turned over at a time.
 */
export function eachTransformed(
  table: Table,
  visit: (result: Table, transform: number) => void,
): void {
  for (let order = 0; order < transforms.length; order += 1 << VARIABLES) {
    const { place } = transforms[order]!;
    let result = moved(table, place);
    let inverted = 0;
    visit(result, order);
    for (let step = 1; step < 1 << VARIABLES; step++) {
      // Gray code: from one step to the next a single variable turns over.
      const variable = 31 - Math.clz32(step & -step);
      result = invertVariable(result, place[variable]!);
      inverted ^= 1 << variable;
      visit(result, order + inverted);
    }
  }
}

function turned(table: Table, inverted: number): Table {
  let result = table;
  for (let v = 0; v < VARIABLES; v++) {
    if (((inverted >>> v) & 1) === 1) result = invertVariable(result, v);
  }
  return result;
}

function moved(table: Table, place: readonly number[]): Table {
  let result = table;
  // The variable that stands at each place so far.
  const at = [0, 1, 2, 3];
  for (let v = 0; v < VARIABLES; v++) {
    const from = at.indexOf(v);
    const to = place[v]!;
    if (from === to) continue;
    result = swapVariables(result, from, to);
    at[from] = at[to]!;
    at[to] = v;
  }
  return result;
}

function orders(items: readonly number[]): number[][] {
  if (items.length === 0) return [[]];
  return items.flatMap((item) =>
    orders(items.filter((other) => other !== item)).map((rest) => [item, ...rest]),
  );
}
