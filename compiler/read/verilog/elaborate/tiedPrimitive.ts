import type { PrimitiveRow, PrimitiveSyntax } from '../syntax.js';

/** Per input of a primitive: the level that it always has, or undefined where it may change. */
export type Ties = readonly (0 | 1 | undefined)[];

/**
 * The primitive that is left where some inputs never change, as power pins do: without their
 * columns, and without the rows that ask for another level of them or for a change. At least one
 * input stays.
 */
export function withoutTied(
  { ports, rows, ...rest }: PrimitiveSyntax,
  ties: Ties,
): { readonly primitive: PrimitiveSyntax; readonly kept: readonly number[] } {
  const free = ports.slice(1).flatMap((_, input) => (ties[input] === undefined ? [input] : []));
  const kept = free.length > 0 ? free : [0];
  const isLeft = ({ inputs }: PrimitiveRow): boolean =>
    inputs.every((symbol, input) => kept.includes(input) || fits(symbol, ties[input]!));
  return {
    primitive: {
      ...rest,
      ports: [ports[0]!, ...kept.map((input) => ports[input + 1]!)],
      rows: rows
        .filter(isLeft)
        .map((row) => ({ ...row, inputs: kept.map((input) => row.inputs[input]!) })),
    },
    kept,
  };
}

const fits = (symbol: string, level: 0 | 1): boolean => `${level}?b`.includes(symbol);
