import { Keyword } from './keywords.js';
import { parseCondition, skipDelay } from './parseDelays.js';
import { parseEventControl } from './parseEvents.js';
import { parseArguments, parseConcat, parseExpression, parseReference } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { Expression, Statement } from './syntax.js';
import { Token } from './tokens.js';

/** `disable` path `;` */
export function parseDisable(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  const reference = parseReference(p);
  if (reference.kind !== 'name') p.fail('the name of a block or task');
  p.expect(Token.Semicolon);
  return { kind: 'disable', path: reference.path, start, end: p.tokens.lastEnd };
}

const proceduralWords: ReadonlyMap<number, string> = new Map([
  [Keyword.assign, 'assign'],
  [Keyword.deassign, 'deassign'],
  [Keyword.force, 'force'],
  [Keyword.release, 'release'],
]);

/** (`assign` | `force`) target `=` value `;` or (`deassign` | `release`) target `;` */
export function parseProcedural(p: Parser): Statement {
  const { start, kind } = p.tokens;
  p.tokens.next();
  parseTarget(p);
  if (kind === Keyword.assign || kind === Keyword.force) {
    p.expect(Token.Equals);
    parseExpression(p);
  }
  p.expect(Token.Semicolon);
  const keyword = proceduralWords.get(kind)!;
  return { kind: 'procedural', keyword, start, end: p.tokens.lastEnd };
}

/** `->` event `;` */
export function parseTrigger(p: Parser): Statement {
  const { start } = p.tokens;
  p.tokens.next();
  parseReference(p);
  p.expect(Token.Semicolon);
  return { kind: 'procedural', keyword: '->', start, end: p.tokens.lastEnd };
}

/** `;` */
export function parseNull(p: Parser): Statement {
  const { start, end } = p.tokens;
  p.tokens.next();
  return { kind: 'null', start, end };
}

/** `$name` [ `(` arguments `)` ] `;` */
export function parseSystemTask(p: Parser): Statement {
  const { start, value } = p.tokens;
  p.tokens.next();
  const list = parseArguments(p);
  p.expect(Token.Semicolon);
  return { kind: 'callTask', path: [value], arguments: list, start, end: p.tokens.lastEnd };
}

/** target (`=` | `<=`) value `;` or task [ `(` arguments `)` ] `;` */
export function parseAssignOrCall(p: Parser): Statement {
  const target = parseReference(p);
  const isCall = p.is(Token.LeftParen) || p.is(Token.Semicolon);
  if (!isCall || target.kind !== 'name' || target.indices !== undefined) {
    return parseAssignFrom(p, target);
  }
  const list = parseArguments(p);
  p.expect(Token.Semicolon);
  const { path, start } = target;
  return { kind: 'callTask', path, arguments: list, start, end: p.tokens.lastEnd };
}

/** target (`=` | `<=`) value `;` of a target that is a concatenation */
export function parseAssignment(p: Parser): Statement {
  return parseAssignFrom(p, parseTarget(p));
}

function parseAssignFrom(p: Parser, target: Expression): Statement {
  const { start } = target;
  const blocking = p.is(Token.Equals);
  if (!blocking && !p.is(Token.LessEqual)) p.fail("'=' or '<=' after the target");
  p.tokens.next();
  const delayed = skipDelay(p);
  const waits = skipInnerEvent(p);
  const value = parseExpression(p);
  p.expect(Token.Semicolon, "';' after the assignment");
  const { lastEnd: end } = p.tokens;
  if (waits) return { kind: 'procedural', keyword: '@', start, end };
  return { kind: 'assign', blocking, ...(delayed && { delayed }), target, value, start, end };
}

/** An event control inside of an assignment; false where there is none. */
function skipInnerEvent(p: Parser): boolean {
  const repeats = p.accept(Keyword.repeat);
  if (repeats) parseCondition(p);
  if (!repeats && !p.is(Token.At)) return false;
  parseEventControl(p);
  return true;
}

/** The target of an assignment: a name with selects, or a concatenation of targets. */
export function parseTarget(p: Parser): Expression {
  return p.is(Token.LeftBrace) ? parseConcat(p) : parseReference(p);
}
