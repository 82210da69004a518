import type { Diagnostics } from '../../diagnostics/diagnostics.js';
import type { Source } from '../../diagnostics/source.js';
import type { SourceMap } from '../../diagnostics/sourceMap.js';
import { NameTable } from '../names.js';
import { Problems } from '../verilog/problems.js';
import type { LibertyCell, LibertyLibrary } from './cell.js';
import { Includes, type LibertyOptions } from './includes.js';
import { LibertyParser } from './parser.js';
import { readCell } from './readCell.js';

/**
 * Reads what a Liberty cell library says of the logic of its cells; all else is passed over.
 *
 * The source and the files it includes are added to `sourceMap`. Faults of the text become
 * diagnostics, and reading goes on after them; what is wrong with one cell is kept in its
 * `problems`, for the day that the cell is used. Several library groups of a file are read as one.
 */
export function readLiberty(
  source: Source,
  options: LibertyOptions,
  sourceMap: SourceMap,
  diagnostics: Diagnostics,
): LibertyLibrary {
  const problems = new Problems(sourceMap, diagnostics);
  const includes = new Includes(options, sourceMap, problems);
  const cells: LibertyCell[] = [];
  const found = diagnostics.list.length;
  const parser = new LibertyParser(new NameTable(), problems, includes, (group, library) => {
    const cell = readCell(group, library);
    if (cell.name !== '') cells.push(cell);
    else problems.add('syntax-error', 'the cell has no name', group.start, group.end);
  });
  const libraries = parser.parseFile(source);
  if (libraries.length === 0 && diagnostics.list.length === found) {
    diagnostics.add('syntax-error', 'the file has no library group', { source, start: 0, end: 0 });
  }
  return { name: libraries[0]?.names[0]?.text ?? '', cells };
}
