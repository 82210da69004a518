import type { Position } from '../../diagnostics/sourceMap.js';
import { Keyword } from './keywords.js';
import { parseCase } from './parseCase.js';
import { parseDeclaration, parseParameters } from './parseDeclarations.js';
import { parseCondition, skipDelay } from './parseDelays.js';
import { parseEventControl } from './parseEvents.js';
import { parseExpression } from './parseExpression.js';
import type { Parser } from './parser.js';
import {
  parseAssignment,
  parseAssignOrCall,
  parseDisable,
  parseNull,
  parseProcedural,
  parseSystemTask,
  parseTarget,
  parseTrigger,
} from './parseSimpleStatement.js';
import type { AssignStatement, Expression, Item, Statement } from './syntax.js';
import { Token } from './tokens.js';

/** Kinds where reading goes on after a statement that failed. */
const statementStops: ReadonlySet<number> = new Set([
  ...[Keyword.end, Keyword.join, Keyword.endcase, Keyword.endfunction, Keyword.endtask],
  ...[Keyword.endmodule, Keyword.module, Keyword.macromodule, Keyword.primitive],
  ...[Keyword.always, Keyword.initial, Keyword.endgenerate],
]);

type StatementParser = (p: Parser) => Statement;

/** The parser of each statement that begins with a keyword or sign. */
const statementParsers: ReadonlyMap<number, StatementParser> = new Map([
  [Keyword.begin, parseBlock],
  [Keyword.fork, parseFork],
  [Keyword.if, parseIf],
  [Keyword.case, parseCaseStatement],
  [Keyword.casex, parseCaseStatement],
  [Keyword.casez, parseCaseStatement],
  [Keyword.for, parseFor],
  [Keyword.repeat, parseRepeat],
  [Keyword.while, parseWhile],
  [Keyword.forever, parseForever],
  [Keyword.wait, parseWait],
  [Keyword.disable, parseDisable],
  [Keyword.assign, parseProcedural],
  [Keyword.deassign, parseProcedural],
  [Keyword.force, parseProcedural],
  [Keyword.release, parseProcedural],
  [Token.Arrow, parseTrigger],
  [Token.At, parseEventStatement],
  [Token.Hash, parseDelayed],
  [Token.Semicolon, parseNull],
  [Token.SystemName, parseSystemTask],
  [Token.Identifier, parseAssignOrCall],
  [Token.LeftBrace, parseAssignment],
] as [number, StatementParser][]);

/** statement_or_null (annex A.6.4) */
export function parseStatement(p: Parser): Statement {
  const parse = statementParsers.get(p.tokens.kind);
  if (parse === undefined) p.fail('a statement');
  p.beginItem(p.is(Token.Identifier) ? p.tokens.value : 0);
  // Those of another statement say nothing about a case inside of it.
  if (parse !== parseCaseStatement) p.tokens.takeCaseAttributes();
  p.enter();
  const statement = parse(p);
  p.leave();
  return statement;
}

/** `begin` [ `:` name ] { declaration } { statement } `end` */
function parseBlock(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const { name, declarations, body } = parseBlockBody(p, Keyword.end);
  return { kind: 'block', name, declarations, body, start, end: p.tokens.lastEnd };
}

/** `fork` … `join`: read, for a clear refusal. */
function parseFork(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  parseBlockBody(p, Keyword.join);
  return { kind: 'procedural', keyword: 'fork', start, end: p.tokens.lastEnd };
}

function parseBlockBody(
  p: Parser,
  last: number,
): { name: number; declarations: Item[]; body: Statement[] } {
  const name = p.accept(Token.Colon) ? p.expectName("the name of the block after ':'") : 0;
  const declarations = parseBlockDeclarations(p, name === 0);
  const body: Statement[] = [];
  while (!p.is(last)) {
    if (isPastBlock(p)) {
      p.fail(last === Keyword.end ? "a statement or 'end'" : "a statement or 'join'");
    }
    const statement = p.attempt(() => parseStatement(p), statementStops);
    if (statement !== undefined) body.push(statement);
  }
  p.tokens.next();
  return { name, declarations, body };
}

function isPastBlock(p: Parser): boolean {
  return p.is(Token.EndOfInput) || statementStops.has(p.tokens.kind) || p.problems.areTooMany;
}

const blockDeclarations: ReadonlyMap<number, (p: Parser, items: Item[]) => void> = new Map([
  [Keyword.reg, parseDeclaration],
  [Keyword.integer, parseDeclaration],
  [Keyword.time, parseDeclaration],
  [Keyword.real, parseDeclaration],
  [Keyword.realtime, parseDeclaration],
  [Keyword.event, parseDeclaration],
  [Keyword.parameter, parseParameters],
  [Keyword.localparam, parseParameters],
]);

/** The declarations at the start of a block, task or function. */
export function parseBlockDeclarations(p: Parser, needsName: boolean): Item[] {
  const items: Item[] = [];
  for (;;) {
    const { kind, start, end } = p.tokens;
    const parse = blockDeclarations.get(kind);
    if (parse === undefined) return items;
    if (needsName && items.length === 0) {
      const message = 'only a block with a name has declarations; write begin : NAME';
      p.problems.add('syntax-error', message, start, end);
    }
    p.attempt(() => parse(p, items), statementStops);
  }
}

/** `if (` condition `)` statement { `else if (` condition `)` statement } [ `else` statement ] */
function parseIf(p: Parser): Statement {
  // Long chains are read in a loop, so that they need no deep stack.
  const pending: { start: Position; condition: Expression; whenTrue: Statement }[] = [];
  let last: Statement | undefined;
  do {
    const { start } = p.tokens;
    p.tokens.next();
    const condition = parseCondition(p);
    pending.push({ start, condition, whenTrue: parseStatement(p) });
    if (!p.accept(Keyword.else)) break;
    if (!p.is(Keyword.if)) last = parseStatement(p);
  } while (last === undefined);
  const end = p.tokens.lastEnd;
  while (pending.length > 0) last = { kind: 'if', ...pending.pop()!, whenFalse: last, end };
  return last!;
}

function parseCaseStatement(p: Parser): Statement {
  return parseCase(p, parseStatement);
}

/** `for (` assignment `;` condition `;` assignment `)` statement */
function parseFor(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const head = p.inParentheses(() => {
    const initial = parseLoopAssign(p);
    p.expect(Token.Semicolon);
    const condition = parseExpression(p);
    p.expect(Token.Semicolon);
    return { initial, condition, step: parseLoopAssign(p) };
  });
  const body = parseStatement(p);
  if (head === undefined) return body;
  return { kind: 'for', ...head, body, start, end: p.tokens.lastEnd };
}

function parseLoopAssign(p: Parser): AssignStatement {
  const target = parseTarget(p);
  p.expect(Token.Equals, "'=' and a value, such as in i = i + 1");
  const value = parseExpression(p);
  const { start } = target;
  return { kind: 'assign', blocking: true, target, value, start, end: value.end };
}

function parseRepeat(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const count = parseCondition(p);
  const body = parseStatement(p);
  return { kind: 'repeat', count, body, start, end: p.tokens.lastEnd };
}

function parseWhile(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const condition = parseCondition(p);
  const body = parseStatement(p);
  return { kind: 'while', condition, body, start, end: p.tokens.lastEnd };
}

function parseForever(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const body = parseStatement(p);
  return { kind: 'forever', body, start, end: p.tokens.lastEnd };
}

function parseWait(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const condition = parseCondition(p);
  const body = parseStatement(p);
  return { kind: 'wait', condition, body, start, end: p.tokens.lastEnd };
}

function parseEventStatement(p: Parser): Statement {
  const { start } = p.tokens;
  const events = parseEventControl(p);
  const body = parseStatement(p);
  return { kind: 'event', events, body, start, end: p.tokens.lastEnd };
}

/** `#` delay statement */
function parseDelayed(p: Parser): Statement {
  const { start } = p.tokens;
  const takesTime = skipDelay(p);
  const body = parseStatement(p);
  return takesTime ? { kind: 'delay', body, start, end: p.tokens.lastEnd } : body;
}
