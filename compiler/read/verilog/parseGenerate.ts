import { Keyword } from './keywords.js';
import { parseCaseItems } from './parseCase.js';
import { parseCondition } from './parseDelays.js';
import { parseExpression } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { GenerateBlock, Item } from './syntax.js';
import { Token } from './tokens.js';

/** Reads items up to a word that ends them, which is not read. */
export type ItemsParser = (p: Parser, items: Item[], last: number) => void;
/** Reads one item. */
export type ItemParser = (p: Parser, items: Item[]) => void;

/** `generate` { item } `endgenerate`: a region without a scope of its own (clause 12.4). */
export function parseGenerateRegion(p: Parser, items: Item[], parseItems: ItemsParser): void {
  p.enter();
  p.tokens.next();
  parseItems(p, items, Keyword.endgenerate);
  p.expect(Keyword.endgenerate);
  p.leave();
}

/** `for (` genvar `=` value `;` condition `;` genvar `=` value `)` block */
export function parseGenerateFor(
  p: Parser,
  items: Item[],
  parseBlock: (p: Parser) => GenerateBlock,
): void {
  const { start } = p.tokens;
  p.tokens.next();
  const head = p.inParentheses(() => {
    const [genvar, initial] = parseGenvarAssign(p);
    p.expect(Token.Semicolon);
    const condition = parseExpression(p);
    p.expect(Token.Semicolon);
    const [stepName, step] = parseGenvarAssign(p);
    return { genvar, initial, condition, stepName, step };
  });
  const body = parseBlock(p);
  const { lastEnd: end } = p.tokens;
  if (head !== undefined) items.push({ kind: 'generateFor', ...head, body, start, end });
}

function parseGenvarAssign(p: Parser): [number, ReturnType<typeof parseExpression>] {
  const name = p.expectName('the name of a genvar');
  p.expect(Token.Equals, "'=' and a value, such as in i = i + 1");
  return [name, parseExpression(p)];
}

/** `if (` condition `)` block [ `else` block ] */
export function parseGenerateIf(
  p: Parser,
  items: Item[],
  parseBlock: (p: Parser) => GenerateBlock,
): void {
  const { start } = p.tokens;
  p.tokens.next();
  const condition = parseCondition(p);
  const whenTrue = parseBlock(p);
  const whenFalse = p.accept(Keyword.else) ? parseBlock(p) : undefined;
  const { lastEnd: end } = p.tokens;
  items.push({ kind: 'generateIf', condition, whenTrue, whenFalse, start, end });
}

/** `case (` subject `)` { labels `:` block } `endcase` */
export function parseGenerateCase(
  p: Parser,
  items: Item[],
  parseBlock: (p: Parser) => GenerateBlock,
): void {
  const { start } = p.tokens;
  p.tokens.next();
  const subject = parseCondition(p);
  const branches = parseCaseItems(p, parseBlock);
  const { lastEnd: end } = p.tokens;
  items.push({ kind: 'generateCase', subject, items: branches, start, end });
}

/** `begin` [ `:` name ] { item } `end`, or one item, or `;` */
export function parseGenerateBlock(
  p: Parser,
  parseItem: ItemParser,
  parseItems: ItemsParser,
): GenerateBlock {
  const { start } = p.tokens;
  const items: Item[] = [];
  let name = 0;
  p.enter();
  if (p.accept(Keyword.begin)) {
    if (p.accept(Token.Colon)) name = p.expectName("the name of the block after ':'");
    parseItems(p, items, Keyword.end);
    p.expect(Keyword.end);
  } else if (!p.accept(Token.Semicolon)) parseItem(p, items);
  p.leave();
  return { name, items, start, end: p.tokens.lastEnd };
}
