import { Keyword } from './keywords.js';
import { parseReference } from './parseExpression.js';
import type { Parser } from './parser.js';
import type { Expression, Item } from './syntax.js';
import { Token } from './tokens.js';

/** Kinds that end a module, also where its `endmodule` is missing. */
export const moduleEnds: ReadonlySet<number> = new Set([
  ...[Keyword.endmodule, Keyword.module, Keyword.macromodule, Keyword.primitive],
  Token.EndOfInput,
]);

const checksThatDelay: ReadonlySet<string> = new Set(['$setuphold', '$recrem']);

// Places of the arguments of these checks (IEEE 1364-2005, clauses 15.2.3 and 15.2.6).
const DELAYED_REFERENCE = 7;
const DELAYED_DATA = 8;

/** A net of the module that follows another one, by its place in the text. */
type Follower = Extract<Item, { readonly kind: 'assign' }>;

/**
 * `specify` … `endspecify`: timing only, set aside, but for the nets that a timing check drives
 * with its delayed signals (clause 15.5): without delay each of them is assigned its signal.
 */
export function parseSpecify(p: Parser, items: Item[]): void {
  const { tokens, names } = p;
  const { start, end } = tokens;
  const followers = new Map<string, Follower>();
  tokens.next();
  while (!p.is(Keyword.endspecify) && !moduleEnds.has(tokens.kind)) {
    const isCheck = p.is(Token.SystemName) && checksThatDelay.has(names.text(tokens.value));
    tokens.next();
    if (isCheck && p.accept(Token.LeftParen)) readCheck(p, followers);
  }
  if (!p.accept(Keyword.endspecify)) p.failAt("the specify block has no 'endspecify'", start, end);
  items.push(...followers.values());
}

/** event `,` event `,` … `)`: the two signals, and the nets that are these signals delayed. */
function readCheck(p: Parser, followers: Map<string, Follower>): void {
  const signals: (Expression | undefined)[] = [];
  for (let place = 0; !isArgumentsEnd(p); place++) {
    if (place < 2) signals.push(readSignal(p));
    else if (place === DELAYED_REFERENCE || place === DELAYED_DATA) {
      const value = signals[place - DELAYED_REFERENCE];
      if (value !== undefined && p.is(Token.Identifier)) follow(p, value, followers);
    }
    skipArgument(p);
    if (!p.accept(Token.Comma)) return;
  }
}

function follow(p: Parser, value: Expression, followers: Map<string, Follower>): void {
  const target = parseReference(p);
  const { start, end } = target;
  // Several checks of one signal name the same net.
  followers.set(keyOf(target), { kind: 'assign', target, value, strength: undefined, start, end });
}

/** The name of a net, with its indices as far as they are plain numbers. */
function keyOf(target: Expression): string {
  switch (target.kind) {
    case 'name':
      return target.path.join('.');
    case 'select':
      return `${keyOf(target.base)}[${keyOf(target.index)}]`;
    case 'number':
      return String(target.value);
    default:
      return `@${target.start}`;
  }
}

/** [ `posedge` | `negedge` | `edge` [ `[` edges `]` ] ] signal (clause 15.1) */
function readSignal(p: Parser): Expression | undefined {
  const isEdge = p.accept(Keyword.edge);
  if (isEdge && p.is(Token.LeftBracket)) {
    while (!p.is(Token.RightBracket) && !isArgumentsEnd(p)) p.tokens.next();
    p.accept(Token.RightBracket);
  } else if (!isEdge && !p.accept(Keyword.posedge)) p.accept(Keyword.negedge);
  return p.is(Token.Identifier) ? parseReference(p) : undefined;
}

/** Goes to the `,` or `)` after an argument. */
function skipArgument(p: Parser): void {
  let depth = 0;
  while (!isStop(p)) {
    if (depth === 0 && (p.is(Token.Comma) || p.is(Token.RightParen))) return;
    if (p.is(Token.LeftParen)) depth++;
    else if (p.is(Token.RightParen)) depth--;
    p.tokens.next();
  }
}

const isArgumentsEnd = (p: Parser): boolean => p.is(Token.RightParen) || isStop(p);

const isStop = (p: Parser): boolean =>
  p.is(Token.Semicolon) || p.is(Keyword.endspecify) || moduleEnds.has(p.tokens.kind);
