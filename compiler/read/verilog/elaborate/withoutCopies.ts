import type { SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import { Char } from '../characters.js';
import type { ModuleSyntax, PrimitiveSyntax, VerilogSyntax } from '../syntax.js';

/**
 * A text without the modules and primitives that stand in it before in the same words, as where
 * several files include or repeat a cell.
 */
export function withoutCopies(syntax: VerilogSyntax, sources: SourceMap): VerilogSyntax {
  const { names } = syntax;
  const modules = firsts(syntax.modules, (one, other) => {
    const isAlike =
      one.defaultNetType === other.defaultNetType &&
      one.unconnectedDrive === other.unconnectedDrive;
    return isAlike && isCopy(one, other, sources);
  });
  const primitives = firsts(syntax.primitives, (one, other) => isCopy(one, other, sources));
  return { names, modules, primitives };
}

function firsts<T extends { readonly name: NameId }>(
  definitions: readonly T[],
  areEqual: (one: T, other: T) => boolean,
): readonly T[] {
  const known = new Map<NameId, T>();
  return definitions.filter((definition) => {
    const first = known.get(definition.name);
    if (first !== undefined) return !areEqual(first, definition);
    known.set(definition.name, definition);
    return true;
  });
}

type Definition = ModuleSyntax | PrimitiveSyntax;

// What macros and directives stood for may differ, so that there may be none.
function isCopy(one: Definition, other: Definition, sources: SourceMap): boolean {
  const [a, b] = [textOf(one, sources), textOf(other, sources)];
  if (a.length === 0 || a.length !== b.length) return false;
  return a.every((byte, i) => byte === b[i] && byte !== Char.Backtick);
}

function textOf({ start, end }: Definition, sources: SourceMap): Uint8Array {
  const { source, start: from, end: to } = sources.span(start, end);
  return source.bytes.subarray(from, to);
}
