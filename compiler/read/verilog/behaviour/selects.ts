import type { NetId } from '../../../circuit/ids.js';
import type { MemoryBinding, SignalBinding } from '../scope.js';
import type { Expression, NameExpression, PartExpression, SelectExpression } from '../syntax.js';
import { bitsOf, unknownBits } from './bits.js';
import type { Context } from './context.js';
import type { FloatingBits } from './floatingBits.js';
import { heldPlace, readHeld } from './heldMemory.js';
import { type IndexValue, indexValue, warnOutside } from './indexValue.js';
import type { Bits, Logic } from './logic.js';
import {
  constantWord,
  indexValues,
  readNets,
  reportIndices,
  type WordSelect,
  withinMemoryLimit,
  wordSelectOf,
  wordWidth,
} from './memorySelect.js';
import { bindingOf } from './names.js';
import { pathText, report } from './report.js';
import { integerOf, partWidth, shapeOf } from './widths.js';
import { indexOf, readWindow } from './window.js';

/** Bits with declared numbers, from which bits and parts are selected. */
interface Vector {
  readonly width: number;
  readonly msb: number;
  readonly lsb: number;
  /** Value of the bit at a place counted from the right, from 0. */
  readonly at: (position: number) => NetId;
  /** What there is beside the bits. */
  readonly outside: NetId;
}

/** What is read of the bits that are selected: their values, or of bits that may be z one half. */
interface View {
  bit(net: NetId, context: Context): NetId;
  /** What there is where the declaration has no bit. */
  outside(logic: Logic): NetId;
}

const values: View = {
  bit: (net, { store }) => store.read(net),
  outside: (logic) => logic.unknown,
};
const data: View = { ...values, bit: (net, { store }) => store.readFloating(net).data };
const enables: View = {
  bit: (net, { store }) => store.readFloating(net).enable,
  outside: (logic) => logic.one,
};

/** Place from the right of a bit by its declared number; not in 0 … width-1 if there is none. */
export function positionOf(vector: { msb: number; lsb: number }, index: number): number {
  return vector.msb >= vector.lsb ? index - vector.lsb : vector.lsb - index;
}

/** What is selected of a variable of which bits may be z. */
export function readFloating(
  expression: SelectExpression | PartExpression,
  context: Context,
): FloatingBits {
  const read = (view: View): Bits =>
    expression.kind === 'select'
      ? readSelect(expression, context, view)
      : readPart(expression, context, view);
  const enable = read(enables);
  return read(data).map((net, bit) => ({ data: net, enable: enable[bit]! }));
}

/** The value of `a[i]`: a bit, or a word of a memory. */
export function readSelect(expression: SelectExpression, context: Context, view = values): Bits {
  const word = wordSelectOf(expression, context);
  if (word !== undefined) return readWord(word, context, view) ?? unknownBits(1, context.logic);
  const vector = vectorOf(expression.base, context, view);
  if (vector === undefined) return unknownBits(1, context.logic);
  const index = indexValue(expression.index, context);
  if (index.kind === 'unknown') return [vector.outside];
  if (index.kind === 'constant') {
    return readFrom(vector, positionOf(vector, index.value), 1, expression, context);
  }
  return context.logic.strictly(readMoving(vector, index, 0, 1, context.logic), index.bits);
}

/** The value of a part select. */
export function readPart(expression: PartExpression, context: Context, view = values): Bits {
  const part = partOf(expression, vectorOf(expression.base, context, view), context);
  if (part === undefined) return unknownBits(shapeOf(expression, context).width, context.logic);
  const { vector, width, index, offset } = part;
  if (index.kind === 'unknown') return new Array<NetId>(width).fill(vector.outside);
  if (index.kind === 'variable') {
    const moving = readMoving(vector, index, offset, width, context.logic);
    return context.logic.strictly(moving, index.bits);
  }
  return readFrom(vector, positionOf(vector, index.value) + offset, width, expression, context);
}

/**
 * A part select: `width` bits from the bit numbered `index` on, `offset` places from it to the
 * left.
 */
interface Part<V> {
  readonly vector: V;
  readonly width: number;
  readonly index: IndexValue;
  readonly offset: number;
}

/** Works out the numbers of a part select; a diagnostic and undefined where they make no sense. */
export function partOf<V extends { msb: number; lsb: number }>(
  expression: PartExpression,
  vector: V | undefined,
  context: Context,
): Part<V> | undefined {
  if (vector === undefined) return undefined;
  const descends = vector.msb >= vector.lsb;
  if (expression.mode !== 'range') {
    const width = partWidth(expression, context);
    const index = indexValue(expression.left, context);
    const upward = (expression.mode === 'up') === descends;
    return { vector, width, index, offset: upward ? 0 : 1 - width };
  }
  const left = integerOf(expression.left, context);
  const right = integerOf(expression.right, context);
  if (left === undefined || right === undefined) return undefined;
  if (left !== right && left > right !== descends) {
    const { msb, lsb } = vector;
    report(
      context.scope.shared,
      'range-invalid',
      expression,
      `the part [${left}:${right}] runs against the declaration [${msb}:${lsb}]; swap its numbers`,
    );
    return undefined;
  }
  const width = Math.abs(left - right) + 1;
  return { vector, width, index: { kind: 'constant', value: right }, offset: 0 };
}

/** What a bit or part is selected from, named or a word of a memory. */
function vectorOf(
  base: NameExpression | SelectExpression,
  context: Context,
  view: View,
): Vector | undefined {
  const outside = view.outside(context.logic);
  const select = wordSelectOf(base, context);
  if (select !== undefined) {
    const word = readWord(select, context, view);
    if (word === undefined) return undefined;
    const { msb, lsb } = select.memory;
    return { width: word.length, msb, lsb, at: (i) => word[i]!, outside };
  }
  let name: Expression = base;
  while (name.kind === 'select') name = name.base;
  const binding = name.kind === 'name' ? bindingOf(name, context) : undefined;
  if (name.kind === 'name' && binding === undefined) return undefined;
  if (reportIndices(base, context)) return undefined;
  if (base.kind === 'name' && binding?.kind === 'parameter') {
    const { value, msb, lsb } = binding;
    const bits = bitsOf(value, value.width, context.logic);
    return { width: value.width, msb, lsb, at: (i) => bits[i]!, outside };
  }
  if (base.kind === 'name' && binding?.kind === 'signal') {
    if (binding.isVector && mayRead(base, binding, context)) {
      const { msb, lsb, nets } = binding;
      const at = (i: number): NetId => view.bit(nets[i]!, context);
      return { width: nets.length, msb, lsb, at, outside };
    }
    if (binding.isVector) return undefined;
  }
  reportNoVector(base, context);
  return undefined;
}

function reportNoVector(base: NameExpression | SelectExpression, context: Context): void {
  const { shared } = context.scope;
  let name = base;
  while (name.kind === 'select') name = name.base;
  report(
    shared,
    'range-invalid',
    base,
    `\`${pathText(shared, name.path)}\` has no bits to select here; declare it with a range`,
  );
}

/** Whether a signal may be read here: not where a constant is asked for, unless it is a local. */
export function mayRead(
  expression: NameExpression,
  binding: SignalBinding | MemoryBinding,
  context: Context,
): boolean {
  if (isAccessible(binding, context)) return true;
  const { shared } = context.scope;
  const text = pathText(shared, expression.path);
  const message = `\`${text}\` is a signal, but a constant is needed here; use literals and parameters`;
  report(shared, 'constant-required', expression, message);
  return false;
}

/** Whether the context lets a signal be read and assigned. */
export function isAccessible(binding: SignalBinding | MemoryBinding, { access }: Context): boolean {
  if (access === 'all') return true;
  if (access === 'variables') return binding.isVariable;
  const first = binding.kind === 'memory' ? binding.words[0]?.[0] : binding.nets[0];
  return (first ?? 0) < 0;
}

function readWord(select: WordSelect, context: Context, view: View): Bits | undefined {
  const { memory, name } = select;
  if (!mayRead(name, memory, context)) return undefined;
  const where = indexValues(select, context);
  const outside = view.outside(context.logic);
  if (typeof where === 'string') return new Array<NetId>(wordWidth(memory)).fill(outside);
  const word = constantWord(memory, where);
  if (memory.held !== undefined) {
    return readHeld(heldPlace(memory, memory.held, where, context), context, word);
  }
  if (word !== undefined) return memory.words[word]!.map((net) => view.bit(net, context));
  if (!withinMemoryLimit(select, context)) return undefined;
  const indices = where.flatMap((value) => (value.kind === 'variable' ? [value.bits] : []));
  const bit = (net: NetId): NetId => view.bit(net, context);
  const bits = readNets(memory, where, { bit, outside }, context.logic);
  return context.logic.strictly(bits, ...indices);
}

/** Bits from a fixed place on; x, and a warning, for those that are not there. */
function readFrom(
  vector: Vector,
  start: number,
  width: number,
  place: SelectExpression | PartExpression,
  context: Context,
): Bits {
  if (start < 0 || start + width > vector.width) {
    warnOutside(place, vector.msb, vector.lsb, context);
  }
  return Array.from({ length: width }, (_, i) => bitAt(vector, start + i));
}

// Bit k of the result is `offset + k` places left of the bit that the index names. With a
// descending range that is bit index + offset + k, so the window moves up with the index; with an
// ascending one it is read mirrored.
function readMoving(
  vector: Vector,
  index: Extract<IndexValue, { kind: 'variable' }>,
  offset: number,
  width: number,
  logic: Logic,
): Bits {
  const range = movingRange(vector, offset, width);
  const address = indexOf(index.bits, index.signed, range.low, range.high, logic);
  if (vector.msb >= vector.lsb) {
    const leaf = (i: number): NetId => bitAt(vector, i + offset - vector.lsb);
    return readWindow(address, width, leaf, logic, vector.outside);
  }
  const leaf = (i: number): NetId => bitAt(vector, vector.lsb - i + offset + width - 1);
  return [...readWindow(address, width, leaf, logic, vector.outside)].reverse();
}

function bitAt(vector: Vector, position: number): NetId {
  return position >= 0 && position < vector.width ? vector.at(position) : vector.outside;
}

/** The values of a moving part's index for which any bit of it is within the vector. */
export function movingRange(
  vector: { readonly width: number; readonly msb: number; readonly lsb: number },
  offset: number,
  width: number,
): { low: number; high: number } {
  if (vector.msb >= vector.lsb) {
    const low = vector.lsb - offset - width + 1;
    return { low, high: vector.lsb + vector.width - 1 - offset };
  }
  return { low: vector.lsb + offset - vector.width + 1, high: vector.lsb + offset + width - 1 };
}
