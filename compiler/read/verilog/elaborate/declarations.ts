import type { NameId } from '../../names.js';
import { PlainNames } from '../plainNames.js';
import type { DeclarationItem, DeclaredName } from '../syntax.js';
import { heldMemory, isHeldFrom, MEMORY_LIMIT, sizeProblem } from './arrays.js';
import { type BlockScope, wordsOf } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { evaluateRange, type Range } from './constants.js';
import { Flag, NetClass, OtherName, SymbolKind } from './symbols.js';

type DeclaredType = NonNullable<DeclarationItem['type']>;

/** How each net type is resolved; the types that are no nets are plain too. */
const classOfType: Partial<Record<DeclaredType, number>> = {
  wand: NetClass.And,
  triand: NetClass.And,
  wor: NetClass.Or,
  trior: NetClass.Or,
  tri0: NetClass.Pull0,
  tri1: NetClass.Pull1,
  trireg: NetClass.Charge,
  supply0: NetClass.Supply0,
  supply1: NetClass.Supply1,
};

const directionFlags = { input: Flag.Input, output: Flag.Output, inout: Flag.Inout } as const;

/** Width of the variables that have no range of their own. */
const fixedRanges: Partial<Record<DeclaredType, Range>> = {
  integer: { msb: 31, lsb: 0 },
  time: { msb: 63, lsb: 0 },
};

/** What the names of a declaration have in common. */
interface Kind {
  readonly range: Range | undefined;
  readonly flags: number;
  readonly netClass: number;
  readonly strength: DeclarationItem['strength'];
}

/** From so many plain wires on it saves memory to leave their names where they are. */
const LONG = 64;

/** Declares the names of one item in a scope (IEEE 1364-2005, clauses 4 and 12.3). */
export function declare(body: ModuleBody, scope: BlockScope, item: DeclarationItem): void {
  const { type } = item;
  if (type === 'genvar' || type === 'event' || type === 'real' || type === 'realtime') {
    for (const declared of item.names) declareOther(body, scope, declared, type);
    return;
  }
  const range = item.range ? evaluateRange(item.range, scope) : type && fixedRanges[type];
  if (item.range !== undefined && range === undefined) {
    // The range is wrong, which has been said; the names stay known.
    for (const declared of item.names) declareOther(body, scope, declared, type);
    return;
  }
  const { strength } = item;
  const netClass = netClassOf(body, item);
  const kind: Kind = { range, flags: flagsOf(item, range), netClass, strength };
  if (!(item.names instanceof PlainNames)) {
    for (const declared of item.names) declareNet(body, scope, declared, kind);
    return;
  }
  declareWires(body, scope, item.names, kind);
}

// A flat netlist declares a million of them.
function declareWires(body: ModuleBody, scope: BlockScope, names: PlainNames, kind: Kind): void {
  const { symbols } = scope;
  const isLong = names.length >= LONG;
  for (let index = 0; index < names.length; index++) {
    const name = names.name(index);
    const other = names.other(index);
    if (isLong && other === undefined && symbols.find(name) < 0) {
      body.buildAt(names.start(index));
      symbols.addWire(names, index, body.builder.declare(1), kind.netClass);
    } else declareNet(body, scope, other ?? names.at(index), kind);
  }
}

/** Declares an implicit scalar net (clause 4.5). */
export function declareImplicit(
  body: ModuleBody,
  scope: BlockScope,
  name: NameId,
  start: number,
  end: number,
): void {
  const type = body.module.defaultNetType;
  body.buildAt(start);
  const value = body.builder.declare(1);
  const netClass = (type && classOfType[type]) ?? NetClass.Plain;
  const { Signal: kind } = SymbolKind;
  scope.symbols.add({ name, kind, value, start, end, netClass, flags: Flag.Implicit });
}

function flagsOf({ direction, type, signed }: DeclarationItem, range: Range | undefined): number {
  const isVariable = type === 'reg' || type === 'integer' || type === 'time';
  return (
    (direction ? directionFlags[direction] : 0) |
    (type === undefined ? 0 : Flag.Typed) |
    (isVariable ? Flag.Variable : 0) |
    (signed ? Flag.Signed : 0) |
    (range === undefined ? 0 : Flag.Vector)
  );
}

function netClassOf({ module }: ModuleBody, { type, direction }: DeclarationItem): number {
  const effective = type ?? (direction ? module.defaultNetType : undefined);
  return (effective && classOfType[effective]) ?? NetClass.Plain;
}

function declareOther(
  body: ModuleBody,
  scope: BlockScope,
  { name, start, end }: DeclaredName,
  type: DeclarationItem['type'],
): void {
  if (!body.isFree(scope, name, start, end)) return;
  const kind = type === 'genvar' ? SymbolKind.Genvar : SymbolKind.Other;
  scope.symbols.add({ name, kind, value: otherNameOf(type), start, end });
}

function otherNameOf(type: DeclarationItem['type']): number {
  if (type === 'event') return OtherName.Event;
  return type === 'real' || type === 'realtime' ? OtherName.Real : OtherName.Faulty;
}

function declareNet(body: ModuleBody, scope: BlockScope, declared: DeclaredName, kind: Kind): void {
  if (declared.dimensions.length > 0) {
    declareMemory(body, scope, declared, kind);
    return;
  }
  const { symbols } = scope;
  const { name } = declared;
  const end = nameEnd(body, declared);
  const known = symbols.find(name);
  if (known >= 0 && completesPort(symbols.kind(known), symbols.flags(known), kind.flags)) {
    completePort(body, scope, known, declared, kind);
  } else {
    if (!body.isFree(scope, name, declared.start, end)) return;
    const { msb, lsb } = kind.range ?? { msb: 0, lsb: 0 };
    body.buildAt(declared.start);
    const value = body.builder.declare(Math.abs(msb - lsb) + 1);
    const { flags, netClass } = kind;
    const { start } = declared;
    symbols.add({ name, kind: SymbolKind.Signal, value, start, end, flags, netClass, msb, lsb });
  }
  const isVariable = (symbols.flags(symbols.find(name)) & Flag.Variable) !== 0;
  keepValue(body, scope, declared, kind, isVariable);
}

/** Whether a declaration and an earlier one make up a port: one the direction, one the type. */
function completesPort(kind: number, known: number, added: number): boolean {
  if (kind !== SymbolKind.Signal) return false;
  const directionFirst = (known & Flag.Inout) !== 0 && (known & Flag.Typed) === 0;
  if (directionFirst) return (added & Flag.Inout) === 0 && (added & Flag.Typed) !== 0;
  return (known & Flag.Inout) === 0 && (added & Flag.Inout) !== 0 && (added & Flag.Typed) === 0;
}

function completePort(
  body: ModuleBody,
  { symbols }: BlockScope,
  symbol: number,
  declared: DeclaredName,
  kind: Kind,
): void {
  const known: Range = { msb: symbols.msb(symbol), lsb: symbols.lsb(symbol) };
  const isVector = (symbols.flags(symbol) & Flag.Vector) !== 0;
  const { range } = kind;
  // A type without range after a port with one is common (`output [3:0] q; reg q;`) and clear.
  const agrees = range
    ? isVector && range.msb === known.msb && range.lsb === known.lsb
    : !isVector || (kind.flags & Flag.Typed) !== 0;
  if (!agrees) {
    const span = body.sources.span(symbols.start(symbol), symbols.end(symbol));
    const message = `the two declarations of port ${body.text(declared.name)} differ in their range`;
    const related = [{ message: 'the other declaration is here', span }];
    body.report('range-invalid', message, declared.start, nameEnd(body, declared), related);
  }
  symbols.addFlags(symbol, kind.flags);
  if (kind.netClass !== NetClass.Plain) symbols.setNetClass(symbol, kind.netClass);
}

function declareMemory(
  body: ModuleBody,
  scope: BlockScope,
  declared: DeclaredName,
  { range, flags, netClass }: Kind,
): void {
  const { name, start, dimensions } = declared;
  const end = nameEnd(body, declared);
  if (!body.isFree(scope, name, start, end)) return;
  const ranges = dimensions.map((each) => evaluateRange(each, scope, MEMORY_LIMIT));
  const { msb, lsb } = range ?? { msb: 0, lsb: 0 };
  const indices = ranges.map((each) => ({
    low: each ? Math.min(each.msb, each.lsb) : 0,
    high: each ? Math.max(each.msb, each.lsb) : 0,
  }));
  const shape = { width: Math.abs(msb - lsb) + 1, indices };
  const isVariable = (flags & Flag.Variable) !== 0;
  const isHeld =
    isVariable && isHeldFrom(shape, body.design.memoriesFrom) && !body.inRegisters.has(start);
  const problem = sizeProblem(shape, isHeld);
  if (problem !== undefined) {
    body.report('not-supported', `array ${body.text(name)} ${problem}`, start, end);
  }
  if (problem !== undefined || ranges.includes(undefined)) {
    const value = OtherName.Faulty;
    scope.symbols.add({ name, kind: SymbolKind.Other, value, start, end });
    return;
  }
  body.buildAt(start);
  const word = { msb, lsb, isSigned: (flags & Flag.Signed) !== 0 };
  const count = scope.memories.push({
    first: body.builder.declare(isHeld ? 0 : wordsOf(indices) * shape.width),
    indices,
    ...(isHeld && { held: heldMemory(body, scope, shape, word, declared) }),
  });
  const { Memory: kind } = SymbolKind;
  scope.symbols.add({ name, kind, value: count - 1, start, end, flags, netClass, msb, lsb });
}

function keepValue(
  body: ModuleBody,
  scope: BlockScope,
  { name, value, start, end }: DeclaredName,
  { strength }: Kind,
  isVariable: boolean,
): void {
  if (value === undefined) return;
  const target = { kind: 'name', path: [name], start, end } as const;
  if (isVariable) body.variableValues.push({ scope, target, value });
  else body.netValues.push({ scope, target, value, strength });
}

// A declared name with a value or dimensions ends after them; its own end is nearer.
function nameEnd(body: ModuleBody, { name, start, end, value, dimensions }: DeclaredName): number {
  if (value === undefined && dimensions.length === 0) return end;
  const { texts } = body.names;
  return start + texts.end(name) - texts.start(name);
}
