import type { Source } from '../../diagnostics/source.js';
import type { Position, SourceMap } from '../../diagnostics/sourceMap.js';
import type { NameTable } from '../names.js';
import type { LibraryCell } from '../verilog/elaborate/libraryCell.js';
import type { LibertyLibrary } from './cell.js';
import { cellTemplate } from './cellTemplate.js';

/**
 * Makes the cells of libraries known to the elaboration of Verilog.
 *
 * `files` are all files of the design in the order in which the user named them: where several
 * have a model of a cell, the first one decides. `names` is the table of the Verilog syntax.
 */
export function libertyCells(
  libraries: readonly LibertyLibrary[],
  names: NameTable,
  files: readonly Source[],
  sources: SourceMap,
): LibraryCell[] {
  const order = new FileOrder(files, sources);
  return libraries.flatMap(({ cells }) =>
    cells.map((cell): LibraryCell => {
      const rank = order.rank(cell.start);
      return {
        name: names.internText(cell.name),
        nameStart: cell.start,
        precedes: (position) => rank < order.rank(position),
        template: (context, place) => cellTemplate(cell, context, place),
      };
    }),
  );
}

/** Which of the named files a position belongs to, included files counted to their includers. */
class FileOrder {
  readonly #sources: SourceMap;
  readonly #rankOf = new Map<Source, number>();

  constructor(files: readonly Source[], sources: SourceMap) {
    this.#sources = sources;
    for (const [rank, file] of files.entries()) this.#rankOf.set(file, rank);
  }

  rank(position: Position): number {
    // Included files come after the named one that they belong to.
    for (let { index } = this.#sources.locate(position); index >= 0; index--) {
      const rank = this.#rankOf.get(this.#sources.sources[index]!);
      if (rank !== undefined) return rank;
    }
    return 0;
  }
}
