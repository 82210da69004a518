import { type NetId, netId } from '../../../circuit/ids.js';
import type { MemoryBinding, SignalBinding } from '../scope.js';
import type { Expression, NameExpression, PartExpression, SelectExpression } from '../syntax.js';
import type { Context } from './context.js';
import { type HeldPlace, heldPlace } from './heldMemory.js';
import { type IndexValue, indexValue, warnOutside } from './indexValue.js';
import {
  constantWord,
  indexValues,
  reportIndices,
  type WordSelect,
  withinMemoryLimit,
  wordSelectOf,
  wordsMeant,
  wordWidth,
} from './memorySelect.js';
import { bindingOf, meaningOf } from './names.js';
import { pathText, report } from './report.js';
import { isAccessible, movingRange, partOf, positionOf } from './selects.js';
import { indexIs, indexOf } from './window.js';

/**
 * One of the places an assignment may go to: its bits, from the right, and the condition under
 * which it is this one. A bit that is outside of the declaration is undefined.
 */
export interface Place {
  /** Nets; or, in a word of a held memory, places in it from the right. */
  readonly bits: readonly (NetId | undefined)[];
  readonly when: NetId;
  /** The word that all places of a piece are in, where it is one of a held memory. */
  readonly word?: HeldPlace;
}

/** A stretch of a target: places of one width that exclude each other. */
export interface Piece {
  readonly width: number;
  readonly places: readonly Place[];
}

/** What may be assigned where: variables by procedures, nets by continuous assignments. */
type TargetKind = 'variable' | 'net';

/** A vector with declared numbers whose bits are places. */
interface Region {
  readonly width: number;
  readonly msb: number;
  readonly lsb: number;
  readonly places: readonly Place[];
}

/** The pieces of an assignment's target, from the right; undefined after a diagnostic. */
export function targetPieces(
  expression: Expression,
  kind: TargetKind,
  context: Context,
): readonly Piece[] | undefined {
  if (expression.kind === 'concat') {
    const parts = expression.parts.map((part) => targetPieces(part, kind, context));
    if (parts.some((pieces) => pieces === undefined)) return undefined;
    return parts.reverse().flatMap((pieces) => pieces!);
  }
  const piece = pieceOf(expression, kind, context);
  return piece && [piece];
}

/** Sum of the widths of a target's pieces. */
export function targetWidth(pieces: readonly Piece[]): number {
  return pieces.reduce((sum, { width }) => sum + width, 0);
}

function pieceOf(expression: Expression, kind: TargetKind, context: Context): Piece | undefined {
  switch (expression.kind) {
    case 'name':
      return regionOf(expression, kind, context);
    case 'select':
      return selectPiece(expression, kind, context);
    case 'part':
      return partPiece(expression, kind, context);
    default:
      report(
        context.scope.shared,
        'target-invalid',
        expression,
        'only names, selects of them and concatenations can be assigned',
      );
      return undefined;
  }
}

function regionOf(
  expression: NameExpression,
  kind: TargetKind,
  context: Context,
): Region | undefined {
  const binding = bindingOf(expression, context);
  if (binding === undefined) return undefined;
  const { shared } = context.scope;
  const text = pathText(shared, expression.path);
  if (binding.kind !== 'signal') {
    const message =
      binding.kind === 'memory'
        ? `\`${text}\` is an array; assign its words one by one`
        : `\`${text}\` is a ${binding.kind === 'routine' ? binding.syntax.kind : binding.kind} ` +
          'and cannot be assigned';
    report(shared, 'target-invalid', expression, message);
    return undefined;
  }
  if (!isOfKind(binding, kind, expression, expression, context)) return undefined;
  if (mayAssign(expression, binding, context)) {
    const { msb, lsb, nets } = binding;
    return { width: nets.length, msb, lsb, places: [{ bits: nets, when: context.logic.one }] };
  }
  return undefined;
}

function isOfKind(
  { isVariable }: SignalBinding | MemoryBinding,
  kind: TargetKind,
  named: NameExpression,
  place: NameExpression | SelectExpression,
  context: Context,
): boolean {
  if (isVariable === (kind === 'variable')) return true;
  const { shared } = context.scope;
  const text = pathText(shared, named.path);
  const message = isVariable
    ? `\`${text}\` is a variable, which only procedures assign; declare it as a wire`
    : `\`${text}\` is a net, which procedures cannot assign; declare it as reg`;
  report(shared, 'target-invalid', place, message);
  return false;
}

// A constant function may change nothing but its own variables.
function mayAssign(
  expression: NameExpression,
  binding: SignalBinding | MemoryBinding,
  context: Context,
): boolean {
  if (isAccessible(binding, context)) return true;
  const { shared } = context.scope;
  const text = pathText(shared, expression.path);
  const message = `\`${text}\` is not a local variable, so a constant function cannot assign it`;
  report(shared, 'constant-required', expression, message);
  return false;
}

function selectPiece(
  expression: SelectExpression,
  kind: TargetKind,
  context: Context,
): Piece | undefined {
  const word = wordRegion(expression, kind, context);
  if (word !== undefined) return word.region;
  const region = baseRegion(expression.base, kind, context);
  if (region === undefined) return undefined;
  const index = indexValue(expression.index, context);
  return partOfRegion(region, index, 0, 1, expression, context);
}

function partPiece(
  expression: PartExpression,
  kind: TargetKind,
  context: Context,
): Piece | undefined {
  const part = partOf(expression, baseRegion(expression.base, kind, context), context);
  if (part === undefined) return undefined;
  return partOfRegion(part.vector, part.index, part.offset, part.width, expression, context);
}

/** What bits of it are selected from: a vector, or a word of a memory. */
function baseRegion(
  base: NameExpression | SelectExpression,
  kind: TargetKind,
  context: Context,
): Region | undefined {
  if (base.kind === 'select') {
    const word = wordRegion(base, kind, context);
    if (word !== undefined) return word.region;
  } else {
    const binding = meaningOf(base, context);
    if (binding?.kind !== 'signal' || binding.isVector) return regionOf(base, kind, context);
  }
  if (reportIndices(base, context)) return undefined;
  let name = base;
  while (name.kind === 'select') name = name.base;
  const text = pathText(context.scope.shared, name.path);
  const message = `\`${text}\` has no bits to select here; declare it with a range`;
  report(context.scope.shared, 'range-invalid', base, message);
  return undefined;
}

/** A word of a memory; undefined if the select is none of a memory. */
function wordRegion(
  expression: SelectExpression,
  kind: TargetKind,
  context: Context,
): { region: Region | undefined } | undefined {
  const select = wordSelectOf(expression, context);
  if (select === undefined) return undefined;
  const { memory, name } = select;
  if (!isOfKind(memory, kind, name, expression, context)) return { region: undefined };
  if (!mayAssign(name, memory, context)) return { region: undefined };
  const places = wordPlaces(select, context);
  const { msb, lsb } = memory;
  return { region: places && { width: wordWidth(memory), msb, lsb, places } };
}

function wordPlaces(select: WordSelect, context: Context): readonly Place[] | undefined {
  const { logic } = context;
  const { memory } = select;
  const values = indexValues(select, context);
  // Nothing is written where an index is x or there is no such word.
  if (values === 'unknown') return [];
  if (values === 'outside') {
    const bits = new Array<undefined>(wordWidth(memory)).fill(undefined);
    return [{ bits, when: logic.one }];
  }
  if (memory.held !== undefined) {
    const word = heldPlace(memory, memory.held, values, context);
    const bits = Array.from({ length: wordWidth(memory) }, (_, bit) => netId(bit));
    return [{ bits, when: logic.not(word.beyond), word }];
  }
  const isConstant = constantWord(memory, values) !== undefined;
  if (!isConstant && !withinMemoryLimit(select, context)) return undefined;
  return wordsMeant(memory, values, logic).map(({ word, when }) => ({
    bits: memory.words[word]!,
    when,
  }));
}

function partOfRegion(
  region: Region,
  index: IndexValue,
  offset: number,
  width: number,
  expression: SelectExpression | PartExpression,
  context: Context,
): Piece {
  const { logic } = context;
  if (index.kind === 'unknown') return { width, places: [] };
  if (index.kind === 'constant') {
    const start = positionOf(region, index.value) + offset;
    if (start < 0 || start + width > region.width) {
      warnOutside(expression, region.msb, region.lsb, context);
    }
    return { width, places: region.places.map((place) => cut(place, start, width)) };
  }
  const { low, high } = movingRange(region, offset, width);
  const address = indexOf(index.bits, index.signed, low, high, logic);
  const places: Place[] = [];
  for (let i = low; i <= high; i++) {
    const chosen = indexIs(address, i, logic);
    if (logic.valueOf(chosen) === 0) continue;
    for (const place of region.places) {
      const part = cut(place, positionOf(region, i) + offset, width);
      places.push({ ...part, when: logic.and(place.when, chosen) });
    }
  }
  return { width, places };
}

function cut(place: Place, start: number, width: number): Place {
  return { ...place, bits: Array.from({ length: width }, (_, i) => place.bits[start + i]) };
}
