import type { CellTable, TableForm } from '../circuit/tables/cellTable.js';
import { Diagram, type PlainDiagram } from '../circuit/tables/diagram.js';

interface PackedForm extends Omit<TableForm, 'diagram'> {
  readonly diagram: PlainDiagram;
}

/** The table of a cell as plain data. */
export interface PackedTable extends Omit<CellTable, 'two' | 'three'> {
  readonly two: PackedForm | undefined;
  readonly three: PackedForm;
}

/** Makes plain data of the table of a cell. */
export const packTable = ({ two, three, ...rest }: CellTable): PackedTable => ({
  ...rest,
  two: two && packForm(two),
  three: packForm(three),
});

/** What `packTable` was given. */
export const unpackTable = ({ two, three, ...rest }: PackedTable): CellTable => ({
  ...rest,
  two: two && unpackForm(two),
  three: unpackForm(three),
});

const packForm = ({ diagram, ...rest }: TableForm): PackedForm => ({
  ...rest,
  diagram: diagram.plain(),
});

const unpackForm = ({ diagram, ...rest }: PackedForm): TableForm => ({
  ...rest,
  diagram: Diagram.of(diagram),
});
