import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../compiler/diagnostics/sourceMap.js';
import { parseVerilog } from '../../../compiler/read/verilog/parse.js';
import type {
  Expression,
  Item,
  ModuleSyntax,
  VerilogSyntax,
} from '../../../compiler/read/verilog/syntax.js';
import { showExpression, showItem } from './show.js';

/** What a text reads as, with its problems as `CODE LINE:COLUMN 'SPANNED TEXT' MESSAGE`. */
export interface Reading {
  readonly syntax: VerilogSyntax;
  readonly problems: readonly string[];
  readonly sourceMap: SourceMap;
}

/** The main file of a reading is `top.v`; `files` are what it may include. */
export function read(
  text: string | Uint8Array,
  options: {
    readonly files?: Readonly<Record<string, string>>;
    readonly defines?: ReadonlyMap<string, string>;
  } = {},
): Reading {
  return readAll([new Source('top.v', text)], options);
}

/** Reads several sources in order. */
export function readAll(
  sources: readonly Source[],
  options: {
    readonly files?: Readonly<Record<string, string>>;
    readonly defines?: ReadonlyMap<string, string>;
  } = {},
): Reading {
  const { files = {}, defines } = options;
  const diagnostics = new Diagnostics();
  const sourceMap = new SourceMap();
  const readInclude = (path: string): Source | undefined => {
    const content = files[path];
    return content === undefined ? undefined : new Source(path, content);
  };
  const parseOptions = { readInclude, ...(defines && { defines }) };
  const syntax = parseVerilog(sources, parseOptions, sourceMap, diagnostics);
  const problems = diagnostics.list.map(({ code, message, span }) => {
    if (span === undefined) return `${code} ${message}`;
    const { source, start, end } = span;
    const { line, column } = source.place(start);
    const path = source.path === 'top.v' ? '' : `${source.path}:`;
    return `${code} ${path}${line}:${column} '${source.slice(start, end)}' ${message}`;
  });
  return { syntax, problems, sourceMap };
}

/** A reading that must have no problem. */
export function readWell(text: string, options: Parameters<typeof read>[1] = {}): VerilogSyntax {
  const { syntax, problems } = read(text, options);
  if (problems.length > 0) throw new Error(problems.join('\n'));
  return syntax;
}

/** The only problem of a text. */
export function onlyProblem(text: string, options: Parameters<typeof read>[1] = {}): string {
  const { problems } = read(text, options);
  if (problems.length !== 1)
    throw new Error(`${problems.length} problems:\n${problems.join('\n')}`);
  return problems[0]!;
}

/** The items of a module with this body, as text. */
export function items(body: string): string[] {
  const syntax = readWell(`module m; ${body}\nendmodule`);
  return showItems(syntax.modules[0]!, syntax);
}

/** The items of a module, as text. */
export function showItems(module: ModuleSyntax, syntax: VerilogSyntax): string[] {
  return module.items.flatMap((item: Item) => showItem(item, module, syntax.names));
}

/** The tree of an expression. */
export function expressionOf(text: string): { expression: Expression; syntax: VerilogSyntax } {
  const syntax = readWell(`module m; assign y = ${text}; endmodule`);
  const item = syntax.modules[0]!.items[0]!;
  if (item.kind !== 'assign') throw new Error(`read as ${item.kind}`);
  return { expression: item.value, syntax };
}

/** An expression as text with all its parentheses. */
export function expression(text: string): string {
  const { expression, syntax } = expressionOf(text);
  return showExpression(expression, syntax.names);
}
