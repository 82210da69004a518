import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';
import { readCommonNames } from './commonNames.js';
import { Keyword, type KeywordText } from './keywords.js';
import { parseOptionalStrength, skipDelay } from './parseDelays.js';
import {
  parseExpression,
  parseMinTypMax,
  parseOptionalRange,
  parseRange,
} from './parseExpression.js';
import type { Parser } from './parser.js';
import { PlainNames } from './plainNames.js';
import type {
  DeclarationItem,
  DeclaredName,
  Direction,
  Item,
  NetType,
  ParameterItem,
  RangeSyntax,
} from './syntax.js';
import { Token } from './tokens.js';

type DeclaredType = NonNullable<DeclarationItem['type']>;

const netWords: ReadonlySet<KeywordText> = new Set<KeywordText & NetType>([
  ...(['wire', 'tri', 'wand', 'wor', 'triand', 'trior', 'tri0', 'tri1', 'trireg'] as const),
  ...(['supply0', 'supply1', 'uwire'] as const),
]);
const variableWords = ['reg', 'integer', 'time', 'real', 'realtime', 'event', 'genvar'] as const;

/** Token kinds that begin a declaration of nets. */
export const netKinds: ReadonlyMap<number, NetType> = new Map(
  [...netWords].map((word) => [Keyword[word], word as NetType]),
);

/** Token kinds that begin a declaration of variables, events or genvars. */
export const variableKinds: ReadonlyMap<number, DeclaredType> = new Map(
  variableWords.map((word) => [Keyword[word], word]),
);

/** Token kinds that begin a declaration of ports. */
export const directionKinds: ReadonlyMap<number, Direction> = new Map([
  [Keyword.input, 'input' as const],
  [Keyword.output, 'output'],
  [Keyword.inout, 'inout'],
]);

/** What stands before the names of a declaration. */
export type DeclaredKind = Pick<
  DeclarationItem,
  'direction' | 'type' | 'signed' | 'range' | 'strength'
>;

/**
 * [ direction ] [ net_type | variable_type ] [ strength ] [ `vectored` | `scalared` ] [ `signed` ]
 * [ range ] [ delay ] (annex A.2.1)
 */
export function parseDeclaredKind(p: Parser): DeclaredKind {
  const { tokens } = p;
  const direction = directionKinds.get(tokens.kind);
  if (direction !== undefined) tokens.next();
  const type = netKinds.get(tokens.kind) ?? variableKinds.get(tokens.kind);
  if (type !== undefined) tokens.next();
  const isNet = type !== undefined && netWords.has(type as KeywordText);
  const strength = isNet ? parseOptionalStrength(p) : undefined;
  if (!p.accept(Keyword.vectored)) p.accept(Keyword.scalared);
  const signed = p.accept(Keyword.signed) || type === 'integer';
  const range = parseOptionalRange(p);
  if (isNet) skipDelay(p);
  return { direction, type, signed, range, strength };
}

/** declaration ::= kind name { `,` name } `;` */
export function parseDeclaration(p: Parser, items: Item[]): void {
  const { start } = p.tokens;
  const kind = parseDeclaredKind(p);
  if (isPlainWire(kind)) {
    parseWires(p, items, kind, start);
    return;
  }
  const names: DeclaredName[] = [];
  do names.push(parseDeclaredName(p, 'the name to declare'));
  while (p.accept(Token.Comma));
  p.expect(Token.Semicolon, "',' or ';' after the declared name");
  items.push({ kind: 'declaration', ...kind, names, start, end: p.tokens.lastEnd });
}

function isPlainWire(kind: DeclaredKind): boolean {
  const { type, direction, signed, range, strength } = kind;
  return type === 'wire' && !direction && !signed && !range && !strength;
}

// A flat netlist may declare a million wires one by one: those that follow each other share an item.
function parseWires(p: Parser, items: Item[], kind: DeclaredKind, start: Position): void {
  const { tokens } = p;
  const last = items[items.length - 1];
  const joins = last?.kind === 'declaration' && last.names instanceof PlainNames;
  const names = joins ? (last.names as PlainNames) : new PlainNames();
  do {
    readCommonNames(p, names);
    if (tokens.kind !== Token.Identifier) p.fail('the name to declare');
    const { value: name, start: nameStart, end: nameEnd } = tokens;
    tokens.next();
    if (tokens.kind === Token.Comma || tokens.kind === Token.Semicolon) {
      names.pushPlain(name, nameStart, nameEnd);
    } else names.push(parseDeclaredNameFrom(p, name, nameStart));
  } while (p.accept(Token.Comma));
  p.expect(Token.Semicolon, "',' or ';' after the declared name");
  const end = tokens.lastEnd;
  if (joins) (last as { end: Position }).end = end;
  else items.push({ kind: 'declaration', ...kind, names, start, end });
}

/** name { range } [ `=` expression ] */
export function parseDeclaredName(p: Parser, what: string): DeclaredName {
  const { start } = p.tokens;
  return parseDeclaredNameFrom(p, p.expectName(what), start);
}

function parseDeclaredNameFrom(p: Parser, name: NameId, start: Position): DeclaredName {
  const dimensions: RangeSyntax[] = [];
  while (p.is(Token.LeftBracket)) dimensions.push(parseRange(p));
  const value = p.accept(Token.Equals) ? parseExpression(p) : undefined;
  return { name, dimensions, value, start, end: p.tokens.lastEnd };
}

const parameterTypes: ReadonlyMap<number, NonNullable<ParameterItem['type']>> = new Map([
  [Keyword.integer, 'integer' as const],
  [Keyword.time, 'time'],
  [Keyword.real, 'real'],
  [Keyword.realtime, 'realtime'],
]);

/** (`parameter` | `localparam`) [ type | [ `signed` ] [ range ] ] name `=` value { , … } `;` */
export function parseParameters(p: Parser, items: Item[]): void {
  const item = parseParameterGroup(p, () => false);
  p.expect(Token.Semicolon, "',' or ';' after the value of the parameter");
  items.push({ ...item, end: p.tokens.lastEnd });
}

/** A group of parameters that share a type; ends before a comma where `isNextGroup` holds. */
export function parseParameterGroup(p: Parser, isNextGroup: () => boolean): ParameterItem {
  const { tokens } = p;
  const { start } = tokens;
  const local = p.is(Keyword.localparam);
  tokens.next();
  const type = parameterTypes.get(tokens.kind);
  if (type !== undefined) tokens.next();
  const signed = p.accept(Keyword.signed) || type === 'integer';
  const range = parseOptionalRange(p);
  const values: {
    name: NameId;
    value: ParameterItem['values'][number]['value'];
    start: number;
    end: number;
  }[] = [];
  do {
    const { start: nameStart } = tokens;
    const name = p.expectName('the name of a parameter');
    p.expect(Token.Equals, "'=' and the value of the parameter");
    const value = parseMinTypMax(p);
    values.push({ name, value, start: nameStart, end: tokens.lastEnd });
  } while (p.accept(Token.Comma) && !isNextGroup());
  return { kind: 'parameter', local, type, signed, range, values, start, end: tokens.lastEnd };
}

/** Goes past `specparam` … `;`, which only times paths. */
export function skipSpecparam(p: Parser): void {
  while (!p.is(Token.Semicolon) && !p.is(Token.EndOfInput)) p.tokens.next();
  p.expect(Token.Semicolon);
}
