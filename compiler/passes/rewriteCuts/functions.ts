/**
 * Functions of four variables as truth tables: bit i of the sixteen is the value where the bits of i
 * are those of the variables, variable 0 lowest. A function of fewer variables ignores the others.
 */
export type Table = number;

/** The most variables of a function. */
export const VARIABLES = 4;

export const ALL: Table = 0xffff;

/** The functions that are a variable. */
export const variables: readonly Table[] = [0xaaaa, 0xcccc, 0xf0f0, 0xff00];

/** Whether the value depends on a variable. */
export function dependsOn(table: Table, variable: number): boolean {
  const shift = 1 << variable;
  return (((table >>> shift) ^ table) & ~variables[variable]! & ALL) !== 0;
}

/** The function with one variable inverted. */
export function invertVariable(table: Table, variable: number): Table {
  const ones = variables[variable]!;
  const shift = 1 << variable;
  return ((table & ones) >>> shift) | ((table & ~ones & ALL) << shift);
}

/** The function with two variables in each other's place. */
export function swapVariables(table: Table, p: number, q: number): Table {
  if (p === q) return table;
  const [low, high] = p < q ? [p, q] : [q, p];
  const shift = (1 << high) - (1 << low);
  // Where the lower variable is 1 and the higher 0.
  const moving = variables[low]! & ~variables[high]! & ALL;
  const staying = ALL ^ moving ^ (moving << shift);
  return (table & staying) | ((table & moving) << shift) | ((table >>> shift) & moving);
}
