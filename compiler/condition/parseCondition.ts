import type { Diagnostics } from '../diagnostics/diagnostics.js';
import type { Source } from '../diagnostics/source.js';
import type { SourceMap } from '../diagnostics/sourceMap.js';
import type { NameTable } from '../read/names.js';
import { internKeywords } from '../read/verilog/keywords.js';
import { parseExpression } from '../read/verilog/parseExpression.js';
import { Parser } from '../read/verilog/parser.js';
import { Preprocessor } from '../read/verilog/preprocess.js';
import { Problems } from '../read/verilog/problems.js';
import type { Expression } from '../read/verilog/syntax.js';
import { Token } from '../read/verilog/tokens.js';

const nowhere: ReadonlySet<number> = new Set();

/**
 * Reads a text that is one expression of IEEE 1364-2005 (annex A.8.3) and nothing else. Returns
 * undefined after a diagnostic.
 */
export function parseCondition(
  source: Source,
  names: NameTable,
  sources: SourceMap,
  diagnostics: Diagnostics,
): Expression | undefined {
  internKeywords(names);
  const problems = new Problems(sources, diagnostics);
  const preprocessor = new Preprocessor(names, sources, problems, {});
  const p = new Parser(preprocessor, names, problems);
  preprocessor.open(source);
  p.tokens.next();
  const read = (): Expression => {
    const expression = parseExpression(p);
    if (!p.is(Token.EndOfInput)) p.fail('an operator or the end of the expression');
    return expression;
  };
  return p.attempt(read, nowhere, false);
}
