import type { Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';

/** A matrix over GF(2): row r lists the input bits whose sum is output bit r. */
export type Matrix = readonly (readonly number[])[];

/** The matrix of a function that is linear over GF(2), from `inputs` to `outputs` bits (up to 32). */
export function matrixOf(f: (x: number) => number, inputs: number, outputs: number): Matrix {
  const columns = Array.from({ length: inputs }, (_, i) => f(2 ** i));
  return Array.from({ length: outputs }, (_, row) =>
    columns.flatMap((column, i) => ((column >>> row) & 1 ? [i] : [])),
  );
}

/** Sums of two to make, in order, and where each row's sum is found. */
export interface XorPlan {
  /** Step s sums two variables; it is itself variable `inputs + s`. */
  readonly steps: readonly (readonly [number, number])[];
  readonly results: readonly number[];
}

/**
 * Shares sums among the rows of a matrix: the pair that most rows hold is summed first, until
 * each row is one variable. Every row must hold an input. The method is Paar's, "Optimized
 * arithmetic for Reed-Solomon encoders", IEEE ISIT 1997.
 */
export function shareSums(matrix: Matrix, inputs: number): XorPlan {
  const rows = matrix.map((row) => new Set(row));
  const steps: [number, number][] = [];
  for (let pair = commonestPair(rows); pair; pair = commonestPair(rows)) {
    const [left, right] = pair;
    for (const row of rows) {
      if (row.has(left) && row.has(right)) {
        row.delete(left);
        row.delete(right);
        row.add(inputs + steps.length);
      }
    }
    steps.push(pair);
  }
  return { steps, results: rows.map((row) => [...row][0]!) };
}

function commonestPair(rows: readonly Set<number>[]): [number, number] | undefined {
  const counts = new Map<number, number>();
  let best: number | undefined;
  for (const row of rows) {
    const members = [...row];
    for (const [i, left] of members.entries()) {
      for (const right of members.slice(i + 1)) {
        const pair = Math.min(left, right) * 65536 + Math.max(left, right);
        const count = (counts.get(pair) ?? 0) + 1;
        counts.set(pair, count);
        if (best === undefined || count > counts.get(best)!) best = pair;
      }
    }
  }
  return best === undefined ? undefined : [Math.floor(best / 65536), best % 65536];
}

/** Multiplies a matrix by the bits of a bus, as shared xor gates. */
export function xorNetwork(m: Module, matrix: Matrix, bus: Bus): Bus {
  const { steps, results } = shareSums(matrix, bus.length);
  const variables: Bit[] = [...bus];
  for (const [left, right] of steps) variables.push(m.xor(variables[left]!, variables[right]!));
  return results.map((variable) => variables[variable]!);
}
