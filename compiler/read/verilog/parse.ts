import type { Diagnostics } from '../../diagnostics/diagnostics.js';
import type { Source } from '../../diagnostics/source.js';
import type { SourceMap } from '../../diagnostics/sourceMap.js';
import { NameTable } from '../names.js';
import { internKeywords, Keyword } from './keywords.js';
import { parseModule } from './parseModule.js';
import { parsePrimitive } from './parsePrimitive.js';
import { Parser } from './parser.js';
import { type PreprocessOptions, Preprocessor } from './preprocess.js';
import { Problems } from './problems.js';
import type { ModuleSyntax, PrimitiveSyntax, VerilogSyntax } from './syntax.js';
import { Token } from './tokens.js';

export type { PreprocessOptions } from './preprocess.js';

/**
 * Reads Verilog (IEEE 1364-2005) as far as netlists, cell models and synthesizable code need it.
 *
 * The sources are read in order as one text: macros and other settings of one hold in the next.
 * They and the files they include are added to `sourceMap`. Faults become diagnostics, and reading
 * goes on after them; with an error among them the tree has gaps and should not be used.
 */
export function parseVerilog(
  sources: readonly Source[],
  options: PreprocessOptions,
  sourceMap: SourceMap,
  diagnostics: Diagnostics,
): VerilogSyntax {
  // A guess for flat netlists; all it does is to save copying.
  const length = sources.reduce((sum, source) => sum + source.bytes.length, 0);
  const names = new NameTable(Math.min(length / 30, 1 << 24));
  internKeywords(names);
  const problems = new Problems(sourceMap, diagnostics);
  const preprocessor = new Preprocessor(names, sourceMap, problems, options);
  const p = new Parser(preprocessor, names, problems);
  const modules: ModuleSyntax[] = [];
  const primitives: PrimitiveSyntax[] = [];
  for (const source of sources) {
    if (problems.areTooMany) break;
    preprocessor.open(source);
    p.tokens.next();
    parseDescriptions(p, modules, primitives);
  }
  return { names, modules, primitives };
}

const descriptionStarts: ReadonlySet<number> = new Set([
  ...[Keyword.module, Keyword.macromodule, Keyword.primitive, Keyword.config],
]);

const primitiveStops = new Set([...descriptionStarts, Keyword.endprimitive]);

/** source_text ::= { module | primitive } (annex A.1.2) */
function parseDescriptions(
  p: Parser,
  modules: ModuleSyntax[],
  primitives: PrimitiveSyntax[],
): void {
  const { tokens } = p;
  while (tokens.kind !== Token.EndOfInput && !p.problems.areTooMany) {
    if (tokens.kind === Keyword.module || tokens.kind === Keyword.macromodule) {
      const module = parseModule(p);
      if (module !== undefined) modules.push(module);
    } else if (tokens.kind === Keyword.primitive) {
      const primitive = p.attempt(() => parsePrimitive(p), primitiveStops, false);
      if (primitive !== undefined) primitives.push(primitive);
      else p.accept(Keyword.endprimitive);
    } else {
      refuse(p);
    }
  }
}

function refuse(p: Parser): void {
  const { tokens } = p;
  const { kind, start, end } = tokens;
  p.beginItem(0);
  if (kind === Keyword.config || kind === Keyword.library || kind === Keyword.include) {
    const message =
      'configurations and library maps are not read; name the files of the design and use --top';
    p.problems.add('not-supported', message, start, end);
    const last = kind === Keyword.config ? Keyword.endconfig : Token.Semicolon;
    while (tokens.kind !== last && tokens.kind !== Token.EndOfInput) tokens.next();
    tokens.next();
    return;
  }
  p.attempt(() => p.fail("'module' or 'primitive'"), descriptionStarts, false);
}
