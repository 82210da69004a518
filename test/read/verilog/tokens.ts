import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../compiler/diagnostics/sourceMap.js';
import { NameTable } from '../../../compiler/read/names.js';
import { internKeywords, keywords } from '../../../compiler/read/verilog/keywords.js';
import { SIGNED_BASE } from '../../../compiler/read/verilog/numbers.js';
import { Preprocessor } from '../../../compiler/read/verilog/preprocess.js';
import { Problems } from '../../../compiler/read/verilog/problems.js';
import type { Scanner } from '../../../compiler/read/verilog/scan.js';
import { Token, tokenTexts } from '../../../compiler/read/verilog/tokens.js';

/** A token of a text as `KIND VALUE`, and the text of its span. */
export interface ShownToken {
  readonly shown: string;
  readonly spanned: string;
}

/** The tokens of `top.v`, which may include `files`, and the problems on the way. */
export function tokensOf(
  text: string | Uint8Array,
  files: Readonly<Record<string, string>> = {},
): { readonly tokens: readonly ShownToken[]; readonly problems: readonly string[] } {
  const names = new NameTable();
  internKeywords(names);
  const sourceMap = new SourceMap();
  const diagnostics = new Diagnostics();
  const preprocessor = new Preprocessor(names, sourceMap, new Problems(sourceMap, diagnostics), {
    readInclude: (path) => {
      const content = files[path];
      return content === undefined ? undefined : new Source(path, content);
    },
  });
  preprocessor.open(new Source('top.v', text));
  const scanner = preprocessor.tokens;
  const tokens: ShownToken[] = [];
  for (;;) {
    scanner.next();
    if (scanner.kind === Token.EndOfInput) break;
    const { source, start, end } = sourceMap.span(scanner.start, scanner.end);
    const spanned = source.slice(start, end);
    tokens.push({ shown: show(scanner, names), spanned });
  }
  const problems = diagnostics.list.map(({ code, message, span }) => {
    const { source, start, end } = span!;
    const { line, column } = source.place(start);
    const path = source.path === 'top.v' ? '' : `${source.path}:`;
    return `${code} ${path}${line}:${column} '${source.slice(start, end)}' ${message}`;
  });
  return { tokens, problems };
}

/** The tokens of a text that has no problem, as `KIND VALUE`. */
export function shown(text: string, files: Readonly<Record<string, string>> = {}): string[] {
  const { tokens, problems } = tokensOf(text, files);
  if (problems.length > 0) throw new Error(problems.join('\n'));
  return tokens.map((token) => token.shown);
}

function show(scanner: Scanner, names: NameTable): string {
  const { kind, value, text, textStart, textEnd } = scanner;
  const inner = new TextDecoder().decode(text.subarray(textStart, textEnd));
  switch (kind) {
    case Token.Identifier:
      return `name ${names.text(value)}`;
    case Token.SystemName:
      return `system ${names.text(value)}`;
    case Token.Number:
      return `number ${inner} ${value}`;
    case Token.Based:
      return `based ${value >= SIGNED_BASE ? 's' : ''}${value % SIGNED_BASE} ${inner}`;
    case Token.Real:
      return `real ${inner}`;
    case Token.String:
      return `string ${inner}`;
  }
  if (kind >= Token.FirstKeyword) return `keyword ${keywords[kind - Token.FirstKeyword]}`;
  return tokenTexts[kind]!.slice(1, -1);
}
