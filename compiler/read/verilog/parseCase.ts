import { Keyword } from './keywords.js';
import { parseCondition } from './parseDelays.js';
import { parseExpressions } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { Expression, Statement } from './syntax.js';
import { Token } from './tokens.js';

interface CaseItem<Body> {
  readonly labels: readonly Expression[];
  readonly body: Body;
}

/** The words that end a case where its `endcase` is missing. */
const caseEnds: ReadonlySet<number> = new Set([
  ...[Keyword.endcase, Keyword.end, Keyword.endmodule, Keyword.endfunction, Keyword.endtask],
  ...[Keyword.endgenerate, Keyword.module, Keyword.macromodule, Keyword.primitive],
  ...[Keyword.always, Keyword.initial],
]);

/** (`case` | `casex` | `casez`) `(` subject `)` { item } `endcase` */
export function parseCase(p: Parser, parseBody: (p: Parser) => Statement): Statement {
  const { start, kind } = p.tokens;
  const attributes = p.tokens.takeCaseAttributes();
  const mode = kind === Keyword.case ? 'case' : kind === Keyword.casex ? 'casex' : 'casez';
  p.tokens.next();
  const subject = parseCondition(p);
  const items = parseCaseItems(p, parseBody);
  return { kind: 'case', mode, subject, items, attributes, start, end: p.tokens.lastEnd };
}

/** { (`default` [ `:` ] | labels `:`) body } `endcase`, of statements or of generate blocks. */
export function parseCaseItems<Body>(p: Parser, parseBody: (p: Parser) => Body): CaseItem<Body>[] {
  const items: CaseItem<Body>[] = [];
  p.enter();
  while (!p.is(Keyword.endcase)) {
    if (caseEnds.has(p.tokens.kind) || p.is(Token.EndOfInput) || p.problems.areTooMany) {
      p.fail("a case item or 'endcase'");
    }
    const item = p.attempt(() => parseCaseItem(p, parseBody), caseEnds);
    if (item !== undefined) items.push(item);
  }
  p.tokens.next();
  p.leave();
  return items;
}

function parseCaseItem<Body>(p: Parser, parseBody: (p: Parser) => Body): CaseItem<Body> {
  if (p.accept(Keyword.default)) {
    p.accept(Token.Colon);
    return { labels: [], body: parseBody(p) };
  }
  const labels = parseExpressions(p);
  p.expect(Token.Colon, "':' after the label of the case item");
  return { labels, body: parseBody(p) };
}
