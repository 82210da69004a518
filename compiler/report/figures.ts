/** A count with its thousands apart: 3,000,000. */
export const figure = (value: number): string => value.toLocaleString('en-US');

/** `1 latch`, `2 latches`; a plural that takes more than an s is given. */
export const counted = (count: number, one: string, several = `${one}s`): string =>
  `${figure(count)} ${count === 1 ? one : several}`;
