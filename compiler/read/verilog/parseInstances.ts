import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';
import { readCommonConnections } from './commonConnections.js';
import { Common, readCommonInstances } from './commonInstances.js';
import { ConnectionKind, type InstanceExtras, POSITIONAL } from './instances.js';
import { FIRST_GATE } from './keywords.js';
import { isStrength, parseParameterValues, parseStrengthFrom, skipDelay } from './parseDelays.js';
import {
  parseExpression,
  parseNameFrom,
  parseOptionalRange,
  parseRest,
  parseSelectFrom,
} from './parseExpression.js';
import { parseNumberFrom } from './parseNumber.js';
import type { Parser } from './parser.js';
import type { Expression, Item, NameExpression, Strength } from './syntax.js';
import { Token } from './tokens.js';

// What a module imports is looked up anew at each use; these constants are not.
const {
  Comma,
  Dot,
  Hash,
  Identifier,
  LeftBracket,
  LeftParen,
  Number: Num,
  RightBracket,
  RightParen,
  Semicolon,
} = Token;

/** name [ strength ] [ parameters ] instance { `,` instance } `;` (annex A.4.1 and A.5.4) */
export function parseModuleInstances(p: Parser, items: Item[]): void {
  if (parseCommonInstances(p, items)) return;
  const { tokens } = p;
  const { start, value: module } = tokens;
  p.beginItem(module);
  tokens.next();
  if (tokens.kind === LeftParen) {
    tokens.next();
    if (!isStrength(p)) {
      parseInstancesFrom(p, items, module, start, undefined);
      return;
    }
    const strength = parseStrengthFrom(p);
    const parameters = p.is(Hash) ? parseParameterValues(p) : [];
    parseInstances(p, items, module, start, { range: undefined, parameters, strength });
  } else if (tokens.kind === Hash) {
    const parameters = parseParameterValues(p);
    parseInstances(p, items, module, start, { range: undefined, parameters, strength: undefined });
  } else {
    parseInstances(p, items, module, start, undefined);
  }
}

/** gate [ strength ] [ delay ] instance { `,` instance } `;` (annex A.3.1) */
export function parseGateInstances(p: Parser, items: Item[]): void {
  if (parseCommonInstances(p, items)) return;
  const { tokens } = p;
  const { start } = tokens;
  const module = -1 - (tokens.kind - FIRST_GATE);
  tokens.next();
  let strength: Strength | undefined;
  if (tokens.kind === LeftParen) {
    tokens.next();
    if (!isStrength(p)) {
      parseInstancesFrom(p, items, module, start, undefined);
      return;
    }
    strength = parseStrengthFrom(p);
  }
  skipDelay(p);
  const extras = strength && { range: undefined, parameters: [], strength };
  parseInstances(p, items, module, start, extras);
}

/** Reads as many items as can be read without tokens; whether there was any. */
function parseCommonInstances(p: Parser, items: Item[]): boolean {
  const { instances, tokens } = p;
  const first = instances.count;
  const end = readCommonInstances(p);
  if (end === Common.Nothing) return false;
  const last = instances.count - 1;
  addInstances(items, first, last - first);
  if (end === Common.Connections) parseConnections(p);
  else if (end === Common.Connection) parseConnectionsFrom(p);
  addInstances(items, last, 1);
  if (end === Common.Items) return true;
  if (p.accept(Comma)) parseInstances(p, items, instances.module(last), tokens.start, undefined);
  else p.expect(Semicolon);
  return true;
}

function parseInstances(
  p: Parser,
  items: Item[],
  module: number,
  start: Position,
  extras: InstanceExtras | undefined,
): void {
  const { tokens } = p;
  let position = start;
  for (;;) {
    let name: NameId = 0;
    let ownExtras = extras;
    if (tokens.kind === Identifier) {
      name = tokens.value;
      tokens.next();
      if (tokens.kind === LeftBracket) ownExtras = withRange(p, extras);
    }
    if (tokens.kind !== LeftParen) p.fail(afterInstanceName(name));
    tokens.next();
    parseOneInstance(p, items, module, name, position, ownExtras);
    if (tokens.kind !== Comma) break;
    tokens.next();
    position = tokens.start;
  }
  p.expect(Semicolon);
}

/** An instance without a name, whose `(` has been read, and what follows it. */
function parseInstancesFrom(
  p: Parser,
  items: Item[],
  module: number,
  start: Position,
  extras: InstanceExtras | undefined,
): void {
  parseOneInstance(p, items, module, 0, start, extras);
  if (p.accept(Comma)) parseInstances(p, items, module, p.tokens.start, extras);
  else p.expect(Semicolon);
}

function parseOneInstance(
  p: Parser,
  items: Item[],
  module: number,
  name: NameId,
  position: Position,
  extras: InstanceExtras | undefined,
): void {
  const instance = p.instances.begin(module, name, position, extras);
  parseConnections(p);
  addInstances(items, instance, 1);
}

function addInstances(items: Item[], first: number, count: number): void {
  if (count === 0) return;
  const last = items[items.length - 1];
  if (last?.kind === 'instances' && last.first + last.count === first) last.count += count;
  else items.push({ kind: 'instances', first, count });
}

function withRange(p: Parser, extras: InstanceExtras | undefined): InstanceExtras {
  const range = parseOptionalRange(p);
  return { parameters: [], strength: undefined, ...extras, range };
}

function afterInstanceName(name: NameId): string {
  return name === 0 ? 'the name of an instance' : "'(' and the connections of the instance";
}

/** connections `)`: all named or all by position */
function parseConnections(p: Parser): void {
  const { tokens } = p;
  if (tokens.kind === RightParen) {
    tokens.next();
    return;
  }
  parseConnectionsFrom(p);
}

/** connection { `,` connection } `)` */
function parseConnectionsFrom(p: Parser): void {
  const { tokens } = p;
  for (;;) {
    if (!readCommonConnections(p)) parseAnyConnection(p);
    if (tokens.kind !== Comma) break;
    tokens.next();
  }
  p.expect(RightParen, "',' or ')'");
}

function parseAnyConnection(p: Parser): void {
  const { tokens } = p;
  if (tokens.kind === Dot) parseNamedConnection(p);
  else if (tokens.kind === Comma || tokens.kind === RightParen) {
    p.instances.connect(POSITIONAL, ConnectionKind.Empty, 0, 0, tokens.start);
  } else parseConnection(p, POSITIONAL);
}

/** `.` port `(` [ expression ] `)` */
function parseNamedConnection(p: Parser): void {
  const { tokens } = p;
  const { start } = tokens;
  tokens.next();
  if (tokens.kind !== Identifier) p.fail("the name of a port after '.'");
  const port = tokens.value;
  tokens.next();
  if (tokens.kind !== LeftParen) p.fail("'(' and the connection of the port");
  tokens.next();
  if (tokens.kind === RightParen) {
    p.instances.connect(port, ConnectionKind.Empty, 0, 0, start);
  } else parseConnection(p, port);
  if (tokens.kind !== RightParen) p.fail("')'");
  tokens.next();
}

// A whole signal or a bit of one goes straight into the columns: no expression is made for them.
function parseConnection(p: Parser, port: number): void {
  const { tokens, instances } = p;
  const { start } = tokens;
  if (tokens.kind !== Identifier) {
    connectExpression(p, port, parseExpression(p), start);
    return;
  }
  const { value: name, end } = tokens;
  tokens.next();
  const { kind } = tokens;
  if (kind === RightParen || kind === Comma) {
    instances.connect(port, ConnectionKind.Name, name, 0, start);
    return;
  }
  const signal: NameExpression = { kind: 'name', path: [name], start, end };
  if (kind !== LeftBracket) {
    connectExpression(p, port, parseRest(p, parseNameFrom(p, signal)), start);
    return;
  }
  parseBit(p, port, signal);
}

/** `[` index `]`, of which a plain number in full makes a bit connection. */
function parseBit(p: Parser, port: number, signal: NameExpression): void {
  const { tokens } = p;
  const { start } = signal;
  tokens.next();
  let index: Expression;
  if (tokens.kind === Num && tokens.value >= 0) {
    const { value, start: indexStart, end: indexEnd } = tokens;
    tokens.next();
    if (tokens.kind === RightBracket) {
      tokens.next();
      const { kind, lastEnd } = tokens;
      if (kind === RightParen || kind === Comma) {
        p.instances.connect(port, ConnectionKind.Bit, signal.path[0]!, value, start);
        return;
      }
      index = parseNumberFrom(p, value, indexStart, indexEnd);
      const bit = { kind: 'select', base: signal, index, start, end: lastEnd } as const;
      connectExpression(p, port, parseRest(p, parseNameFrom(p, bit)), start);
      return;
    }
    index = parseRest(p, parseNumberFrom(p, value, indexStart, indexEnd));
  } else index = parseExpression(p);
  const selected = parseSelectFrom(p, signal, index);
  const operand = selected.kind === 'part' ? selected : parseNameFrom(p, selected);
  connectExpression(p, port, parseRest(p, operand), start);
}

function connectExpression(p: Parser, port: number, value: Expression, start: Position): void {
  const { instances } = p;
  instances.connect(port, ConnectionKind.Expression, instances.expressions.length, 0, start);
  instances.expressions.push(value);
}
