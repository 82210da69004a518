import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../../names.js';
import type { Budget } from '../budget.js';
import type { Template } from './template.js';

/** What the making of a cell's template needs of the design. */
export interface CellContext {
  readonly names: NameTable;
  readonly sources: SourceMap;
  readonly diagnostics: Diagnostics;
  readonly budget: Budget;
}

/** A cell that a library in another form than Verilog describes; instances name it like a module. */
export interface LibraryCell {
  readonly name: NameId;
  readonly nameStart: Position;
  /** Whether its file was named before the one that a position belongs to. */
  precedes(position: Position): boolean;
  /** Compiles it for an instance at `place`; what is wrong with it is reported. */
  template(context: CellContext, place: Position): Template;
}
