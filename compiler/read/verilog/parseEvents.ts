import { Keyword } from './keywords.js';
import { parseExpression, parseReference } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { EventSyntax } from './syntax.js';
import { Token } from './tokens.js';

/** `@*`, `@(*)`, `@` name or `@(` event { (`or` | `,`) event } `)`; undefined for the first two. */
export function parseEventControl(p: Parser): readonly EventSyntax[] | undefined {
  p.expect(Token.At);
  if (p.accept(Token.Star)) return undefined;
  if (!p.accept(Token.LeftParen)) {
    const expression = parseReference(p);
    return [{ edge: 'any', expression, start: expression.start, end: expression.end }];
  }
  if (p.accept(Token.Star)) {
    p.expect(Token.RightParen);
    return undefined;
  }
  const events: EventSyntax[] = [];
  do events.push(parseEvent(p));
  while (p.accept(Keyword.or) || p.accept(Token.Comma));
  p.expect(Token.RightParen, "'or', ',' or ')' after the event");
  return events;
}

/** [ `posedge` | `negedge` ] expression */
function parseEvent(p: Parser): EventSyntax {
  const { start } = p.tokens;
  let edge: EventSyntax['edge'] = 'any';
  if (p.accept(Keyword.posedge)) edge = 'posedge';
  else if (p.accept(Keyword.negedge)) edge = 'negedge';
  const expression = parseExpression(p);
  return { edge, expression, start, end: p.tokens.lastEnd };
}
