import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Source } from '../../../diagnostics/source.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type { ModuleSyntax, VerilogSyntax } from '../syntax.js';
import type { LibraryCell } from './libraryCell.js';

/** The definitions that are left when some are replaced. */
export interface Replaced {
  readonly syntax: VerilogSyntax;
  readonly cells: readonly LibraryCell[];
  /** The modules that gave way: what they instantiate is no top. */
  readonly dropped: readonly ModuleSyntax[];
}

interface Named {
  readonly name: NameId;
  readonly nameStart: Position;
}

/**
 * Leaves of all modules, primitives and cells with a replaced name those of the source that
 * `replacements` gives for it, or of a file that this one includes.
 *
 * The sources of `replacements` were read after all others. Reports a source without such a
 * definition; its name then keeps what it has.
 */
export function withReplacements(
  syntax: VerilogSyntax,
  cells: readonly LibraryCell[],
  replacements: ReadonlyMap<string, Source>,
  sources: SourceMap,
  diagnostics: Diagnostics,
): Replaced {
  const { names, modules, primitives } = syntax;
  const givers = new Set(replacements.values());
  // An included file follows the one that includes it.
  const giverOf = ({ nameStart }: Named): Source | undefined => {
    let index = sources.locate(nameStart).index;
    while (index > 0 && !givers.has(sources.sources[index]!)) index--;
    const found = sources.sources[index];
    return found && givers.has(found) ? found : undefined;
  };
  const chosen = new Map<NameId, Source>();
  for (const [text, source] of replacements) {
    const name = names.internText(text);
    const own = [...modules, ...primitives].filter((each) => giverOf(each) === source);
    if (own.some((each) => each.name === name)) chosen.set(name, source);
    else {
      const list = own.map((each) => names.text(each.name)).join(', ');
      const message =
        `${source.path} defines no module ${text} that could replace another; ` +
        (list === '' ? 'it defines none' : `it defines ${list}`);
      diagnostics.add('choice-unknown', message, { source, start: 0, end: 0 });
    }
  }
  const stays = (each: Named): boolean =>
    !chosen.has(each.name) || giverOf(each) === chosen.get(each.name);
  return {
    syntax: { ...syntax, modules: modules.filter(stays), primitives: primitives.filter(stays) },
    cells: cells.filter(({ name }) => !chosen.has(name)),
    dropped: modules.filter((module) => !stays(module)),
  };
}
