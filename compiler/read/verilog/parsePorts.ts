import { Keyword } from './keywords.js';
import {
  directionKinds,
  parseDeclaredKind,
  parseDeclaredName,
  parseParameterGroup,
} from './parseDeclarations.js';
import { parseConcat, parseReference } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { DeclaredName, Expression, HeaderPort, Item } from './syntax.js';
import { Token } from './tokens.js';

/** `#(` `parameter` … { `,` [ `parameter` ] … } `)`, if one comes (annex A.1.3) */
export function parseHeaderParameters(p: Parser, items: Item[]): void {
  if (!p.accept(Token.Hash)) return;
  p.expect(Token.LeftParen);
  if (p.accept(Token.RightParen)) return;
  const isParameter = (): boolean => p.is(Keyword.parameter) || p.is(Keyword.localparam);
  if (!isParameter()) p.fail("'parameter'");
  while (isParameter()) items.push(parseParameterGroup(p, isParameter));
  p.expect(Token.RightParen, "',' or ')' after the value of the parameter");
}

/** `(` ports `)`, if they come: declared in place, or names to be declared in the body. */
export function parsePorts(p: Parser, items: Item[]): HeaderPort[] {
  if (!p.accept(Token.LeftParen)) return [];
  if (p.accept(Token.RightParen)) return [];
  return directionKinds.has(p.tokens.kind) ? parseDeclaredPorts(p, items) : parseNamedPorts(p);
}

/** direction kind name { `,` name } { `,` direction … } `)` */
function parseDeclaredPorts(p: Parser, items: Item[]): HeaderPort[] {
  const ports: HeaderPort[] = [];
  let isMore = true;
  while (isMore) {
    const { start } = p.tokens;
    if (!directionKinds.has(p.tokens.kind)) p.fail("'input', 'output' or 'inout'");
    const kind = parseDeclaredKind(p);
    const names: DeclaredName[] = [];
    do {
      const declared = parseDeclaredName(p, 'the name of a port');
      names.push(declared);
      ports.push(portOf(declared));
      isMore = p.accept(Token.Comma);
    } while (isMore && !directionKinds.has(p.tokens.kind));
    items.push({ kind: 'declaration', ...kind, names, start, end: p.tokens.lastEnd });
  }
  p.expect(Token.RightParen, "',' or ')' after the port");
  return ports;
}

function portOf(declared: DeclaredName): HeaderPort {
  const { name, start, end } = declared;
  return { name, expression: { kind: 'name', path: [name], start, end }, start, end };
}

/** [ port ] { `,` [ port ] } `)` */
function parseNamedPorts(p: Parser): HeaderPort[] {
  const ports: HeaderPort[] = [];
  do ports.push(parsePort(p));
  while (p.accept(Token.Comma));
  p.expect(Token.RightParen, "',' or ')' after the port");
  return ports;
}

/** port ::= [ expression ] | `.` name `(` [ expression ] `)` */
function parsePort(p: Parser): HeaderPort {
  const { start } = p.tokens;
  if (p.is(Token.Comma) || p.is(Token.RightParen)) {
    return { name: 0, expression: undefined, start, end: start };
  }
  if (!p.accept(Token.Dot)) {
    const expression = parsePortExpression(p);
    const name = expression.kind === 'name' ? expression.path[0]! : 0;
    return { name, expression, start, end: expression.end };
  }
  const name = p.expectName("the name of a port after '.'");
  p.expect(Token.LeftParen);
  const expression = p.is(Token.RightParen) ? undefined : parsePortExpression(p);
  p.expect(Token.RightParen);
  return { name, expression, start, end: p.tokens.lastEnd };
}

function parsePortExpression(p: Parser): Expression {
  if (p.is(Token.LeftBrace)) return parseConcat(p);
  if (!p.is(Token.Identifier)) p.fail('a port');
  return parseReference(p);
}
