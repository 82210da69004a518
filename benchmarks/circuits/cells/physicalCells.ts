import { cellName, inputs, outputs, type PhysicalCell, type TriStateCell } from './cell.js';
import { expression } from './expression.js';

/** Buffers and inverters whose output can be z. */
export const triStateCells: readonly TriStateCell[] = (
  [
    ['tri_buffer', 'en', 'buf a'],
    ['tri_buffer_low', 'en_n', 'buf a'],
    ['tri_inverter', 'en', 'not a'],
    ['tri_inverter_low', 'en_n', 'not a'],
  ] as const
).map(([family, enable, text]) => ({
  kind: 'triState',
  name: cellName(family, 2),
  family,
  drive: 2,
  pins: [...outputs('y'), ...inputs('a', enable)],
  is: expression(text),
  enable,
}));

/** Cells that are there for the layout alone; the number in the name is their width. */
export const physicalCells: readonly PhysicalCell[] = (
  [
    ['fill', [1, 2, 4, 8], []],
    ['tap', [1], []],
    ['decap', [4, 8], []],
    ['antenna', [1], ['a']],
  ] as const
).flatMap(([family, drives, pins]) =>
  drives.map(
    (drive): PhysicalCell => ({
      kind: 'physical',
      name: cellName(family, drive),
      family,
      drive,
      pins: inputs(...pins),
    }),
  ),
);
