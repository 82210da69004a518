import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';
import { decode } from './decode.js';
import { parseNumber } from './parseNumber.js';
import { MAX_DEPTH, type Parser } from './parser.js';
import type {
  BinaryOperator,
  Expression,
  NameExpression,
  PartExpression,
  RangeSyntax,
  SelectExpression,
  UnaryOperator,
} from './syntax.js';
import { Token, tokenTexts } from './tokens.js';

/** Strength of binding of the binary operators (clause 5.1.2), by token; 0 for other tokens. */
const precedence = new Uint8Array(256);
const binaryLevels: readonly (readonly number[])[] = [
  [Token.OrOr],
  [Token.AndAnd],
  [Token.Or],
  [Token.Xor, Token.Xnor],
  [Token.And],
  [Token.Equal, Token.NotEqual, Token.CaseEqual, Token.CaseNotEqual],
  [Token.Less, Token.LessEqual, Token.Greater, Token.GreaterEqual],
  [Token.ShiftLeft, Token.ShiftRight, Token.ArithmeticLeft, Token.ArithmeticRight],
  [Token.Plus, Token.Minus],
  [Token.Star, Token.Slash, Token.Percent],
  [Token.Power],
];
binaryLevels.forEach((kinds, level) => {
  for (const kind of kinds) precedence[kind] = level + 1;
});

const unaryKinds = new Uint8Array(256);
for (const kind of [
  ...[Token.Plus, Token.Minus, Token.Not, Token.Tilde, Token.And, Token.Nand, Token.Or],
  ...[Token.Nor, Token.Xor, Token.Xnor],
]) {
  unaryKinds[kind] = 1;
}

/** Texts of operators by token, without the quotes of messages. */
const operatorTexts = Array.from({ length: 256 }, (_, kind) => tokenTexts[kind]?.slice(1, -1));

/** expression ::= operand { binary_operator operand } [ `?` expression `:` expression ] */
export function parseExpression(p: Parser): Expression {
  return parseRest(p, parseOperand(p));
}

/** Goes on with an expression whose first operand has been read. */
export function parseRest(p: Parser, first: Expression): Expression {
  const condition = parseBinary(p, first);
  return p.is(Token.Question) ? parseConditional(p, condition) : condition;
}

/** `( expression [ : expression : expression ] )`, of which the typical value is taken. */
export function parseMinTypMax(p: Parser): Expression {
  const first = parseExpression(p);
  if (!p.accept(Token.Colon)) return first;
  const typical = parseExpression(p);
  p.expect(Token.Colon);
  parseExpression(p);
  return typical;
}

/** expression { `,` expression } */
export function parseExpressions(p: Parser): Expression[] {
  const list = [parseExpression(p)];
  while (p.accept(Token.Comma)) list.push(parseExpression(p));
  return list;
}

/** range ::= `[` expression `:` expression `]` */
export function parseRange(p: Parser): RangeSyntax {
  const { start } = p.tokens;
  p.expect(Token.LeftBracket);
  const left = parseExpression(p);
  p.expect(Token.Colon, "':' between the ends of the range");
  const right = parseExpression(p);
  p.expect(Token.RightBracket);
  return { left, right, start, end: p.tokens.lastEnd };
}

/** A range if a `[` comes. */
export function parseOptionalRange(p: Parser): RangeSyntax | undefined {
  return p.is(Token.LeftBracket) ? parseRange(p) : undefined;
}

// Chains `a ? b : c ? d : …` are read in a loop, so that a long one needs no deep stack.
function parseConditional(p: Parser, first: Expression): Expression {
  const pending: { condition: Expression; whenTrue: Expression }[] = [];
  let last = first;
  while (p.accept(Token.Question)) {
    p.enter();
    const whenTrue = parseExpression(p);
    p.leave();
    p.expect(Token.Colon, "':' of the conditional expression");
    pending.push({ condition: last, whenTrue });
    last = parseBinary(p, parseOperand(p));
  }
  for (const { condition, whenTrue } of pending.reverse()) {
    const { start } = condition;
    last = { kind: 'conditional', condition, whenTrue, whenFalse: last, start, end: last.end };
  }
  return last;
}

// Operands and operators wait on stacks of their own until an operator that binds no stronger comes:
// recursion by levels would need eleven calls for each pair of parentheses.
function parseBinary(p: Parser, first: Expression): Expression {
  const { tokens } = p;
  if (precedence[tokens.kind] === 0) return first;
  const operator = tokens.kind;
  tokens.next();
  const second = parseOperand(p);
  return precedence[tokens.kind] === 0
    ? binary(operator, first, second)
    : parseMore(p, [first, second], [operator]);
}

/** Goes on with an expression that has more than two operands. */
function parseMore(p: Parser, operands: Expression[], operators: number[]): Expression {
  const { tokens } = p;
  for (;;) {
    const { kind } = tokens;
    const level = precedence[kind]!;
    while (operators.length > 0 && precedence[operators.at(-1)!]! >= level) {
      const right = operands.pop()!;
      operands.push(binary(operators.pop()!, operands.pop()!, right));
    }
    if (level === 0) return operands[0]!;
    operators.push(kind);
    tokens.next();
    operands.push(parseOperand(p));
  }
}

function binary(kind: number, left: Expression, right: Expression): Expression {
  const operator = operatorTexts[kind] as BinaryOperator;
  return { kind: 'binary', operator, left, right, start: left.start, end: right.end };
}

/** operand ::= [ unary_operator ] primary */
function parseOperand(p: Parser): Expression {
  const { tokens } = p;
  const { kind, start } = tokens;
  if (kind === Token.Identifier) return parseNameOrCall(p);
  if (unaryKinds[kind] === 1) {
    p.enter();
    tokens.next();
    const operand = parseOperand(p);
    p.leave();
    const operator = operatorTexts[kind] as UnaryOperator;
    return { kind: 'unary', operator, operand, start, end: operand.end };
  }
  switch (kind) {
    case Token.Number:
    case Token.Based:
    case Token.Real:
      return parseNumber(p);
    case Token.String:
      return parseString(p);
    case Token.SystemName: {
      const name = tokens.value;
      tokens.next();
      return parseCall(p, [name], start);
    }
    case Token.LeftParen: {
      p.enter();
      tokens.next();
      const inner = parseMinTypMax(p);
      p.expect(Token.RightParen);
      p.leave();
      // It is new, and nobody else has it yet.
      const widened: { start: Position; end: Position } = inner;
      widened.start = start;
      widened.end = tokens.lastEnd;
      return inner;
    }
    case Token.LeftBrace:
      return parseConcat(p);
    default:
      return p.fail('an expression');
  }
}

/** `{` expressions `}` or `{` expression `{` expressions `}` `}` */
export function parseConcat(p: Parser): Expression {
  const { start } = p.tokens;
  p.enter();
  p.expect(Token.LeftBrace);
  const parts = parseExpressions(p);
  if (parts.length === 1 && p.accept(Token.LeftBrace)) {
    const repeated = parseExpressions(p);
    p.expect(Token.RightBrace);
    p.expect(Token.RightBrace);
    p.leave();
    const end = p.tokens.lastEnd;
    return { kind: 'replicate', count: parts[0]!, parts: repeated, start, end };
  }
  p.expect(Token.RightBrace);
  p.leave();
  return { kind: 'concat', parts, start, end: p.tokens.lastEnd };
}

function parseString(p: Parser): Expression {
  const { tokens } = p;
  const { start, end } = tokens;
  const raw = decode(tokens.text, tokens.textStart, tokens.textEnd);
  tokens.next();
  return { kind: 'string', text: unescaped(raw), start, end };
}

/** The text of a string (clause 3.6.3): `\n`, `\t`, `\\`, `\"` and `\ddd` in octal. */
function unescaped(raw: string): string {
  if (!raw.includes('\\')) return raw;
  return raw.replace(/\\([0-7]{1,3}|\r?\n|.)/gs, (_whole, code: string) => {
    if (/^[0-7]/.test(code)) return String.fromCharCode(Number.parseInt(code, 8));
    if (code === 'n') return '\n';
    if (code === 't') return '\t';
    return code.endsWith('\n') ? '' : code;
  });
}

function parseNameOrCall(p: Parser): Expression {
  const { start, value, end } = p.tokens;
  p.tokens.next();
  return parseNameFrom(p, { kind: 'name', path: [value], start, end });
}

/** Goes on with an operand whose first name has been read. */
export function parseNameFrom(p: Parser, first: NameExpression | SelectExpression): Expression {
  const reference = parseReferenceFrom(p, first);
  if (p.is(Token.LeftParen) && reference.kind === 'name' && reference.indices === undefined) {
    return parseCall(p, reference.path, reference.start);
  }
  return reference;
}

/** A name with selects, as the target of an assignment or task call begins. */
export function parseReference(p: Parser): NameExpression | SelectExpression | PartExpression {
  const { start, end } = p.tokens;
  const name = p.expectName('a name');
  return parseReferenceFrom(p, { kind: 'name', path: [name], start, end });
}

/** name { `.` name } { `[` expression `]` } [ `[` range `]` ], from the first name or select on. */
export function parseReferenceFrom(
  p: Parser,
  first: NameExpression | SelectExpression,
): NameExpression | SelectExpression | PartExpression {
  let reference = first;
  for (let length = 0; ; length++) {
    if (length === MAX_DEPTH) {
      p.failAt(`a name has ${MAX_DEPTH} elements and indices at most`, first.start, first.end);
    }
    if (p.is(Token.Dot)) reference = parseMember(p, reference);
    else if (p.is(Token.LeftBracket)) {
      const selected = parseSelect(p, reference);
      if (selected.kind === 'part') return selected;
      reference = selected;
    } else return reference;
  }
}

/** `.` name, after a name that may have one index. */
function parseMember(p: Parser, base: NameExpression | SelectExpression): NameExpression {
  p.tokens.next();
  const name = p.expectName("a name after '.'");
  const end = p.tokens.lastEnd;
  const { start } = base;
  if (base.kind === 'name') {
    const path = [...base.path, name];
    if (base.indices === undefined) return { kind: 'name', path, start, end };
    return { kind: 'name', path, indices: [...base.indices, undefined], start, end };
  }
  const owner = base.base;
  if (owner.kind === 'select') {
    p.failAt('an element of a hierarchical name has one index at most', start, base.end);
  }
  const indices = owner.indices ?? owner.path.map(() => undefined);
  const path = [...owner.path, name];
  return {
    kind: 'name',
    path,
    indices: [...indices.slice(0, -1), base.index, undefined],
    start,
    end,
  };
}

function parseSelect(
  p: Parser,
  base: NameExpression | SelectExpression,
): SelectExpression | PartExpression {
  p.enter();
  p.tokens.next();
  const left = parseExpression(p);
  const result = parseSelectFrom(p, base, left);
  p.leave();
  return result;
}

const partModes: ReadonlyMap<number, PartExpression['mode']> = new Map([
  [Token.Colon, 'range' as const],
  [Token.PlusColon, 'up'],
  [Token.MinusColon, 'down'],
]);

/** Goes on with a select after its first index. */
export function parseSelectFrom(
  p: Parser,
  base: NameExpression | SelectExpression,
  left: Expression,
): SelectExpression | PartExpression {
  const { start } = base;
  const mode = partModes.get(p.tokens.kind);
  if (mode === undefined) {
    p.expect(Token.RightBracket);
    return { kind: 'select', base, index: left, start, end: p.tokens.lastEnd };
  }
  p.tokens.next();
  const right = parseExpression(p);
  p.expect(Token.RightBracket);
  return { kind: 'part', base, mode, left, right, start, end: p.tokens.lastEnd };
}

/** [ `(` [ expressions ] `)` ] after the name of a function. */
function parseCall(p: Parser, path: readonly NameId[], start: Position): Expression {
  p.enter();
  const list = parseArguments(p);
  p.leave();
  return { kind: 'call', path, arguments: list, start, end: p.tokens.lastEnd };
}

/** [ `(` [ expressions ] `)` ] after the name of a function or task; empty places are left out. */
export function parseArguments(p: Parser): Expression[] {
  const list: Expression[] = [];
  if (!p.accept(Token.LeftParen)) return list;
  while (!p.is(Token.RightParen)) {
    if (!p.is(Token.Comma)) list.push(parseExpression(p));
    if (!p.is(Token.RightParen)) p.expect(Token.Comma, "',' or ')'");
  }
  p.tokens.next();
  return list;
}
