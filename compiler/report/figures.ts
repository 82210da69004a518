/**
 * A count with its thousands apart: 3,000,000. Not by `toLocaleString`, whose first call takes as
 * long as reading a small netlist.
 */
export const figure = (count: number): string => String(count).replace(/\B(?=(?:\d{3})+$)/g, ',');

/** `1 latch`, `2 latches`; a plural that takes more than an s is given. */
export const counted = (count: number, one: string, several = `${one}s`): string =>
  `${figure(count)} ${count === 1 ? one : several}`;
