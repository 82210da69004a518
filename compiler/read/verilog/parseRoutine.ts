import { Keyword } from './keywords.js';
import {
  directionKinds,
  parseDeclaration,
  parseDeclaredKind,
  parseDeclaredName,
} from './parseDeclarations.js';
import { parseOptionalRange } from './parseExpression.js';
import type { Parser } from './parser.js';
import { parseBlockDeclarations, parseStatement } from './parseStatement.js';
import type { DeclaredName, Item, RoutineItem } from './syntax.js';
import { Token } from './tokens.js';

const resultTypes: ReadonlyMap<number, NonNullable<RoutineItem['resultType']>> = new Map([
  [Keyword.integer, 'integer' as const],
  [Keyword.real, 'real'],
  [Keyword.time, 'time'],
  [Keyword.realtime, 'realtime'],
]);

/**
 * `function` [ `automatic` ] [ type | [ `signed` ] [ range ] ] name [ `(` arguments `)` ] `;`
 * { declaration } statement `endfunction` (annex A.2.6)
 */
export function parseFunction(p: Parser, items: Item[]): void {
  const { tokens } = p;
  const { start } = tokens;
  tokens.next();
  const automatic = p.accept(Keyword.automatic);
  const resultType = resultTypes.get(tokens.kind);
  if (resultType !== undefined) tokens.next();
  const signed = p.accept(Keyword.signed) || resultType === 'integer';
  const range = parseOptionalRange(p);
  const result = { automatic, signed, range, resultType };
  addRoutine(p, items, 'function', result, start);
}

/** `task` [ `automatic` ] name [ `(` arguments `)` ] `;` { declaration } statement `endtask` */
export function parseTask(p: Parser, items: Item[]): void {
  const { start } = p.tokens;
  p.tokens.next();
  const automatic = p.accept(Keyword.automatic);
  const result = { automatic, signed: false, range: undefined, resultType: undefined };
  addRoutine(p, items, 'task', result, start);
}

type Result = Pick<RoutineItem, 'automatic' | 'signed' | 'range' | 'resultType'>;

/** Kinds where reading goes on after a routine that failed. */
const routineStops: ReadonlySet<number> = new Set([
  ...[Keyword.endfunction, Keyword.endtask, Keyword.endmodule, Keyword.module],
  ...[Keyword.macromodule, Keyword.primitive, Keyword.always, Keyword.initial],
]);

function addRoutine(
  p: Parser,
  items: Item[],
  kind: RoutineItem['kind'],
  result: Result,
  start: number,
): void {
  const routine = p.attempt(() => parseRoutine(p, kind, result, start), routineStops, false);
  if (routine !== undefined) items.push(routine);
  else if (!p.accept(Keyword.endfunction)) p.accept(Keyword.endtask);
}

function parseRoutine(
  p: Parser,
  kind: RoutineItem['kind'],
  result: Result,
  start: number,
): RoutineItem {
  const last = kind === 'function' ? Keyword.endfunction : Keyword.endtask;
  const name = p.expectName(`the name of the ${kind}`);
  const declarations: Item[] = [];
  if (p.accept(Token.LeftParen)) parseArgumentList(p, declarations);
  p.expect(Token.Semicolon);
  for (;;) {
    const before = declarations.length;
    if (directionKinds.has(p.tokens.kind)) parseDeclaration(p, declarations);
    else declarations.push(...parseBlockDeclarations(p, false));
    if (declarations.length === before) break;
  }
  const body = parseBody(p, last);
  p.expect(
    last,
    `'end${kind}' after the one statement of the ${kind}; group more with begin … end`,
  );
  return { kind, name, ...result, declarations, body, start, end: p.tokens.lastEnd };
}

function parseBody(p: Parser, last: number): RoutineItem['body'] {
  const { start } = p.tokens;
  if (p.is(last)) return { kind: 'null', start, end: start };
  return parseStatement(p);
}

/** [ direction kind name { `,` name } { `,` direction … } ] `)` */
function parseArgumentList(p: Parser, declarations: Item[]): void {
  if (p.accept(Token.RightParen)) return;
  let isMore = true;
  while (isMore) {
    const { start, kind: word } = p.tokens;
    if (!directionKinds.has(word)) p.fail("'input', 'output' or 'inout'");
    const kind = parseDeclaredKind(p);
    const names: DeclaredName[] = [];
    do {
      names.push(parseDeclaredName(p, 'the name of an argument'));
      isMore = p.accept(Token.Comma);
    } while (isMore && !directionKinds.has(p.tokens.kind));
    declarations.push({ kind: 'declaration', ...kind, names, start, end: p.tokens.lastEnd });
  }
  p.expect(Token.RightParen, "',' or ')'");
}
