import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { Binding } from '../scope.js';
import type { DeclarationItem, DeclaredName, Item, ParameterItem } from '../syntax.js';
import { bitsOf, knownOf, resize } from './bits.js';
import type { Context } from './context.js';
import type { LocalScope } from './localScope.js';
import { refuse } from './names.js';
import { type Placed, report } from './report.js';
import { constantIn, integerOf, MAX_WIDTH } from './widths.js';

/** Left and right number of a declaration. */
interface Range {
  readonly msb: number;
  readonly lsb: number;
}

/**
 * Adds the variables and parameters that items declare; `context.scope` is the scope itself, so
 * that ranges may use parameters declared before.
 */
export function declareLocals(items: readonly Item[], scope: LocalScope, context: Context): void {
  const inside = { ...context, scope };
  for (const item of items) {
    if (item.kind === 'declaration') declareVariables(item, scope, inside);
    else if (item.kind === 'parameter') declareParameters(item, scope, inside);
  }
}

/** A variable of a given range that lives in the context's store alone. */
export function localVariable(
  name: NameId,
  range: Range | undefined,
  signed: boolean,
  context: Context,
): Extract<Binding, { kind: 'signal' }> {
  const { msb, lsb } = range ?? { msb: 0, lsb: 0 };
  const nets = localBits(msb, lsb, context);
  const isVector = range !== undefined;
  return { kind: 'signal', name, msb, lsb, isVector, signed, isVariable: true, nets };
}

/** The range of a type: declared, or that of `integer` and `time`. */
export function rangeOfType(
  type: string | undefined,
  range: DeclarationItem['range'],
  context: Context,
): Range | undefined {
  if (type === 'integer') return { msb: 31, lsb: 0 };
  if (type === 'time') return { msb: 63, lsb: 0 };
  return range === undefined ? undefined : checkedRange(range, context);
}

function checkedRange(
  range: NonNullable<DeclarationItem['range']>,
  context: Context,
): Range | undefined {
  const msb = integerOf(range.left, context);
  const lsb = integerOf(range.right, context);
  if (msb === undefined || lsb === undefined) return undefined;
  if (Math.abs(msb - lsb) < MAX_WIDTH) return { msb, lsb };
  reportTooLarge(range, context);
  return undefined;
}

function reportTooLarge(place: Placed, context: Context): void {
  const message = `more than ${MAX_WIDTH} elements are too many here; make the range smaller`;
  report(context.scope.shared, 'range-invalid', place, message);
}

function localBits(msb: number, lsb: number, context: Context): NetId[] {
  return Array.from({ length: Math.abs(msb - lsb) + 1 }, () => context.store.local());
}

function declareVariables(item: DeclarationItem, scope: LocalScope, context: Context): void {
  if (item.type === 'real' || item.type === 'realtime' || item.type === 'event') {
    refuse(context, item, `\`${item.type}\` has no bits; use reg or integer`);
    for (const { name } of item.names) scope.refuse(name, item.type === 'event' ? 'event' : 'real');
    return;
  }
  const range = rangeOfType(item.type, item.range, context);
  const signed = item.signed || item.type === 'integer';
  for (const declared of item.names) {
    // `input a; reg [3:0] a;` declares one variable in two steps.
    const earlier = scope.own(declared.name);
    if (earlier !== undefined && !(item.range !== undefined && narrow(earlier))) continue;
    scope.add(
      declared.name,
      declared.dimensions.length === 0
        ? localVariable(declared.name, range, signed, context)
        : localMemory(declared, range ?? { msb: 0, lsb: 0 }, signed, context),
    );
  }
}

function narrow(binding: Binding): boolean {
  return binding.kind === 'signal' && !binding.isVector;
}

function localMemory(
  { name, dimensions, start, end }: DeclaredName,
  { msb, lsb }: Range,
  signed: boolean,
  context: Context,
): Binding {
  const indices = dimensions.map((dimension) => {
    const range = checkedRange(dimension, context) ?? { msb: 0, lsb: 0 };
    return { low: Math.min(range.msb, range.lsb), high: Math.max(range.msb, range.lsb) };
  });
  const count = indices.reduce((product, { low, high }) => product * (high - low + 1), 1);
  if (count > MAX_WIDTH) reportTooLarge({ start, end }, context);
  // The words take time and room wherever the routine is called.
  context.scope.shared.budget.spend((count * (Math.abs(msb - lsb) + 1)) / 8);
  const words = Array.from({ length: Math.min(count, MAX_WIDTH) }, () =>
    localBits(msb, lsb, context),
  );
  return { kind: 'memory', name, msb, lsb, signed, isVariable: true, indices, words };
}

function declareParameters(item: ParameterItem, scope: LocalScope, context: Context): void {
  const { logic } = context;
  const range = rangeOfType(item.type, item.range, context);
  for (const { name, value } of item.values) {
    const constant = constantIn(value, context);
    if (constant === undefined) continue;
    const width = range === undefined ? constant.width : Math.abs(range.msb - range.lsb) + 1;
    const typed = range !== undefined || item.signed || item.type !== undefined;
    const signed = typed ? item.signed || item.type === 'integer' : constant.signed;
    const bits = resize(bitsOf(constant, constant.width, logic), width, constant.signed, logic);
    const { msb, lsb } = range ?? { msb: width - 1, lsb: 0 };
    const exact = { width, signed, ...knownOf(bits, logic)! };
    scope.add(name, { kind: 'parameter', value: exact, msb, lsb });
  }
}
