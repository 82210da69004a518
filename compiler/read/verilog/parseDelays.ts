import { Keyword } from './keywords.js';
import { parseExpression, parseMinTypMax, parseReference } from './parseExpression.js';
import { parseNumber, parseNumberFrom, plainNumber } from './parseNumber.js';
import type { Parser } from './parser.js';
import type { Expression, Strength } from './syntax.js';
import { Token } from './tokens.js';

/**
 * Reads and sets aside `#` delay or `#(` delays `)`, if one comes (clause 7.14). Returns whether it
 * is one that takes time: any but a plain 0.
 */
export function skipDelay(p: Parser): boolean {
  if (!p.accept(Token.Hash)) return false;
  if (!p.is(Token.LeftParen)) return takesTime(parseDelayValue(p));
  p.tokens.next();
  let takes = false;
  do takes = takesTime(parseMinTypMax(p)) || takes;
  while (p.accept(Token.Comma));
  p.expect(Token.RightParen);
  return takes;
}

const takesTime = (delay: Expression): boolean =>
  delay.kind !== 'number' || delay.value !== 0n || delay.unknown !== 0n;

/** delay_value ::= number | name, without parentheses */
export function parseDelayValue(p: Parser): Expression {
  const { kind } = p.tokens;
  if (kind === Token.Identifier) return parseReference(p);
  if (kind === Token.Number) return parsePlainDelay(p);
  if (kind === Token.Real || kind === Token.Based) return parseNumber(p);
  return p.fail("a number, a name or '(' after '#'");
}

/**
 * A delay has no base (clause 7.14): in `#1 'h0` the value stands apart. Where both touch, as in
 * `#4'd5`, one number is meant.
 */
function parsePlainDelay(p: Parser): Expression {
  const { start, end, value } = p.tokens;
  if (value < 0) return parseNumber(p);
  p.tokens.next();
  if (p.tokens.start === end) return parseNumberFrom(p, value, start, end);
  return plainNumber(value, start, end);
}

type Level = Strength['zero'];

// Which value a strength word is for, and how strong it is.
const strengthWords: ReadonlyMap<number, readonly [0 | 1, Level]> = new Map([
  [Keyword.supply0, [0, 'supply'] as const],
  [Keyword.strong0, [0, 'strong']],
  [Keyword.pull0, [0, 'pull']],
  [Keyword.weak0, [0, 'weak']],
  [Keyword.highz0, [0, 'highz']],
  [Keyword.supply1, [1, 'supply']],
  [Keyword.strong1, [1, 'strong']],
  [Keyword.pull1, [1, 'pull']],
  [Keyword.weak1, [1, 'weak']],
  [Keyword.highz1, [1, 'highz']],
]);

/** Whether the current token is a drive strength. */
export function isStrength(p: Parser): boolean {
  return strengthWords.has(p.tokens.kind);
}

/** `strength [ , strength ] )` after the `(`; what is not given is strong (clause 7.1.2). */
export function parseStrengthFrom(p: Parser): Strength {
  const levels: [Level, Level] = ['strong', 'strong'];
  do {
    const word = strengthWords.get(p.tokens.kind);
    if (word === undefined) p.fail('a strength, such as strong0 or pull1');
    levels[word[0]] = word[1];
    p.tokens.next();
  } while (p.accept(Token.Comma));
  p.expect(Token.RightParen);
  return { zero: levels[0], one: levels[1] };
}

const chargeWords: ReadonlySet<number> = new Set([Keyword.small, Keyword.medium, Keyword.large]);

/** A drive strength in parentheses, or a charge strength, which is set aside. */
export function parseOptionalStrength(p: Parser): Strength | undefined {
  if (!p.accept(Token.LeftParen)) return undefined;
  if (!chargeWords.has(p.tokens.kind)) return parseStrengthFrom(p);
  p.tokens.next();
  p.expect(Token.RightParen);
  return undefined;
}

/** `#(` … `)` or `#` value of a module instance: parameters, or the delay of a primitive. */
export function parseParameterValues(p: Parser): { name: number; value: Expression }[] {
  p.expect(Token.Hash);
  if (!p.accept(Token.LeftParen)) return [{ name: 0, value: parseDelayValue(p) }];
  const values: { name: number; value: Expression }[] = [];
  if (p.accept(Token.RightParen)) return values;
  do {
    if (!p.accept(Token.Dot)) values.push({ name: 0, value: parseMinTypMax(p) });
    else {
      const name = p.expectName("the name of a parameter after '.'");
      p.expect(Token.LeftParen);
      if (!p.is(Token.RightParen)) values.push({ name, value: parseMinTypMax(p) });
      p.expect(Token.RightParen);
    }
  } while (p.accept(Token.Comma));
  p.expect(Token.RightParen);
  return values;
}

/** `(` expression `)`, as after `if`, `while`, `repeat`, `wait` and `case` */
export function parseCondition(p: Parser): Expression {
  p.expect(Token.LeftParen);
  const condition = parseExpression(p);
  p.expect(Token.RightParen);
  return condition;
}
