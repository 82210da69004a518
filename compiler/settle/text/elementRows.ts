import type { ElementReport, Witness } from '../settleReport.js';
import { type FoldedName, foldNames } from './foldNames.js';
import { grouped } from './grouped.js';
import type { Row } from './tableLines.js';

/** One row for each number of cycles, with the elements to which `afterOf` gives it. */
export function rowsByCycle(
  elements: readonly ElementReport[],
  afterOf: (element: ElementReport) => number | undefined,
): Row[] {
  const groups = grouped(elements, (element) => afterOf(element) ?? 0);
  return [...groups]
    .sort(([p], [q]) => p - q)
    .map(([after, members]) => ({
      label: `after ${after.toLocaleString('en-US')}`,
      cells: foldNames(members).map(({ name, items }) => ({ text: name, bits: items.length })),
    }));
}

/** One row with the names of elements. */
export const rowOfNames = (elements: readonly ElementReport[]): Row[] => [
  {
    label: '',
    cells: foldNames(elements).map(({ name, items }) => ({ text: name, bits: items.length })),
  },
];

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
  const when = after === cycles ? '' : ` after ${after.toLocaleString('en-US')} cycles`;
  return {
    label: name,
    cells: [
      { text: `${digits(first)} in lane ${lanes[0]}`, bits: items.length },
      { text: `${digits(second)} in lane ${other}${when}`, bits: 0 },
    ],
  };
}

const digits = (bits: readonly number[]): string =>
  bits.length === 1 ? `${bits[0]}` : `0x${hexadecimal(bits)}`;

const hexadecimal = (bits: readonly number[]): string =>
  BigInt(`0b${bits.join('')}`)
    .toString(16)
    .padStart(Math.ceil(bits.length / 4), '0');
