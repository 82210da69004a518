import { FALSE, type Literal, type Logic, LogicOp, nodeOf, TRUE } from '../../logic/logic.js';
import { shapesOf } from '../packWords/shapes.js';
import { findAdders } from './adders.js';
import type { Addition } from './addition.js';
import { conjunctionsOf } from './conjunctions.js';
import { type Network, networksOf, Uses } from './networks.js';
import { topBit } from './topColumn.js';
import { wordsOf } from './words.js';

/** Bits of the numbers that are added in one go. */
export const WIDEST = 64;

/** Networks of fewer adders are left alone. */
const LEAST_ADDERS = 5;

/**
 * Finds ripple adders, subtractors and counters, and trees of adders that end in one row of bits.
 *
 * They are networks of full and half adders. Each adder is proven by truth table: its inputs add up
 * to its outputs, the carry counted twice. So, by induction over the adders, all that goes into a
 * network adds up to all that comes out, each bit counted by its column; and where one bit comes out
 * of each column, these are the digits of the sum, since a number has but one binary form. It does
 * not matter how a carry was built.
 */
export function findAdditions(logic: Logic): Addition[] {
  const adders = findAdders(logic);
  if (adders.list.length < LEAST_ADDERS) return [];
  const uses = new Uses(logic, adders);
  const networks = networksOf(uses, LEAST_ADDERS);
  if (networks.length === 0) return [];
  const shapes = shapesOf(logic);
  const columnOf = new Map<number, number>();
  for (const [i, { outputs }] of networks.entries()) {
    for (const { column, literal } of outputs) {
      if (literal >= 0) columnOf.set(nodeOf(literal), i * 4 * WIDEST + column);
    }
  }
  const sums = networks.flatMap((network) => {
    const closed = closedNetwork(uses, network, shapes[2]!);
    return closed === undefined ? [] : [additionOf(logic, closed, shapes, columnOf)];
  });
  return [...sums, ...conjunctionsOf(logic, sums)];
}

/** A network cut off above the columns that matter, each of which gives one bit. */
interface Closed {
  readonly inputs: readonly (readonly Literal[])[];
  readonly sum: readonly Literal[];
}

function closedNetwork(
  uses: Uses,
  { inputs, outputs }: Network,
  shape: Uint32Array,
): Closed | undefined {
  const columns: Literal[][] = [];
  for (const { column, literal } of outputs) {
    columns[column] ??= [];
    columns[column].push(literal);
  }
  const of = (column: number): readonly Literal[] => columns[column] ?? [];
  let width = 0;
  while (width < columns.length && of(width).length <= 1) width++;
  const sum = Array.from({ length: width }, (_, column) => of(column)[0] ?? -1);
  const isRead = (column: number): boolean => of(column).some((literal) => literal >= 0);
  for (let column = width + 1; column < columns.length; column++) {
    if (isRead(column)) return undefined;
  }
  const mustClose = width < columns.length && isRead(width);
  const top = mustClose ? width : width - 1;
  const carries = of(top);
  if (top < 1 || carries.length === 0 || carries.some((literal) => literal < 0)) {
    return mustClose ? undefined : cutTo(inputs, sum);
  }
  const below = (inputs[top - 1] ?? []).filter((literal) => literal > TRUE).map(nodeOf);
  const usual = new Set(below.map((node) => shape[node]!));
  const extra = (inputs[top] ?? []).length;
  const isUsual = (node: number): boolean => usual.has(shape[node]!);
  const { op, a } = uses.logic;
  const isNext = (node: number): boolean =>
    op[node]! < LogicOp.And && below.some((at) => op[at] === op[node] && a[at]! + 1 === a[node]!);
  const bit = topBit(uses, carries, below.length - extra, { isUsual, isNext });
  if (bit === undefined) return mustClose ? undefined : cutTo(inputs, sum);
  // A carry that leaves the sum for something else.
  const isAlike =
    bit.inputs.length === below.length || bit.inputs.every((literal) => isUsual(nodeOf(literal)));
  if (!mustClose && !isAlike) return cutTo(inputs, sum);
  const whole = Array.from({ length: top + 1 }, (_, column) => inputs[column] ?? []);
  whole[top] = [...whole[top]!, ...bit.inputs];
  return cutTo(whole, [...sum.slice(0, top), bit.literal]);
}

// Without columns at the top that nothing reads. They count multiples of what is left.
function cutTo(
  inputs: readonly (readonly Literal[])[],
  sum: readonly Literal[],
): Closed | undefined {
  let width = sum.length;
  while (width > 0 && sum[width - 1]! < 0) width--;
  if (width === 0 || width > WIDEST) return undefined;
  const columns = Array.from({ length: width }, (_, column) => inputs[column] ?? []);
  return { inputs: columns, sum: sum.slice(0, width) };
}

function additionOf(
  logic: Logic,
  { inputs, sum }: Closed,
  shapes: readonly Uint32Array[],
  columnOf: ReadonlyMap<number, number>,
): Addition {
  const width = sum.length;
  let constant = 0n;
  const variable = inputs.map((column, i) =>
    column.filter((literal) => {
      if (literal === TRUE) constant += 1n << BigInt(i);
      return literal !== TRUE && literal !== FALSE;
    }),
  );
  const words = wordsOf(logic, variable, shapes, columnOf);
  return { width, words, constant: BigInt.asUintN(width, constant), sum };
}
