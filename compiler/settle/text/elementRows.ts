import { counted, figure } from '../../report/figures.js';
import type { ElementReport, Witness } from '../settleReport.js';
import { type FoldedName, foldNames } from './foldNames.js';
import { grouped } from './grouped.js';
import type { Row } from './tableLines.js';

/** The names of elements, in one row for each span of cycles that `afterOf` gives to a vector. */
export function rowsByCycle(
  elements: readonly ElementReport[],
  afterOf: (element: ElementReport) => number,
): Row[] {
  const vectors = foldNames(elements).map(({ name, items }) => {
    const cycles = items.map(afterOf);
    return { name, bits: items.length, first: Math.min(...cycles), last: Math.max(...cycles) };
  });
  vectors.sort((p, q) => p.first - q.first || p.last - q.last);
  const spans = grouped(vectors, ({ first, last }) =>
    first === last ? `after ${figure(first)}` : `after ${figure(first)}-${figure(last)}`,
  );
  return [...spans].map(([label, members]) => ({
    label,
    cells: members.map(({ name, bits }) => ({ text: name, bits })),
  }));
}

/** One row with the names of elements. */
export const rowOfNames = (elements: readonly ElementReport[]): Row[] => [
  {
    label: '',
    cells: foldNames(elements).map(({ name, items }) => ({ text: name, bits: items.length })),
  },
];

/** Hexadecimal digits that are still read at a glance. */
const MOST_DIGITS = 16;

interface Differing {
  readonly name: string;
  readonly witness: Witness;
}

/** One row for each element or vector on which lanes differ, with its values in two lanes. */
export function witnessRows(elements: readonly ElementReport[], cycles: number): Row[] {
  const differing = elements.flatMap(({ name, witness }) => (witness ? [{ name, witness }] : []));
  // Only what has been compared with the same lane at the same time makes one value.
  const groups = grouped(differing, ({ witness }) => `${witness.lanes[0]} ${witness.after}`);
  return [...groups.values()].flatMap((members) =>
    foldNames(members).map((vector) => witnessRow(vector, cycles)),
  );
}

function witnessRow({ name, items }: FoldedName<Differing>, cycles: number): Row {
  const { after, lanes } = items[0]!.witness;
  // In a lower lane than the lowest that differs, a bit has the same value as in the first.
  const other = Math.min(...items.map(({ witness }) => witness.lanes[1]));
  const first = items.map(({ witness }) => witness.values[0]);
  const second = items.map(({ witness }) => witness.values[witness.lanes[1] === other ? 1 : 0]);
  const when = after === cycles ? '' : ` after ${counted(after, 'cycle')}`;
  const cells =
    items.length > MOST_DIGITS * 4
      ? [`${figure(unlike(first, second))} bits differ in lanes ${lanes[0]} and ${other}${when}`]
      : [`${digits(first)} in lane ${lanes[0]}`, `${digits(second)} in lane ${other}${when}`];
  return {
    label: name,
    cells: cells.map((text, i) => ({ text, bits: i === 0 ? items.length : 0 })),
  };
}

const unlike = (p: readonly number[], q: readonly number[]): number =>
  p.reduce((sum, bit, i) => sum + (bit ^ q[i]!), 0);

const digits = (bits: readonly number[]): string =>
  bits.length === 1 ? `${bits[0]}` : `0x${hexadecimal(bits)}`;

const hexadecimal = (bits: readonly number[]): string =>
  BigInt(`0b${bits.join('')}`)
    .toString(16)
    .padStart(Math.ceil(bits.length / 4), '0');
