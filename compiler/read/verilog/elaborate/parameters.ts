import { evaluateConstant, isRealFunction, walk } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { Expression, Item, ParameterItem } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { converted, evaluateRange, numberOf, type Range } from './constants.js';
import type { Overrides } from './overrides.js';
import { NO_VALUE, REAL_VALUE, SymbolKind } from './symbols.js';

/**
 * Gives the parameters among some items their values, in order: the override, or the value
 * declared (IEEE 1364-2005, clauses 4.10 and 12.2).
 */
export function bindParameters(
  body: ModuleBody,
  scope: BlockScope,
  items: readonly Item[],
  overrides: Overrides,
): void {
  for (const item of items) {
    if (item.kind !== 'parameter') continue;
    const type = parameterType(item, scope);
    for (const { name, value, start, end } of item.values) {
      if (!body.isFree(scope, name, start, end)) continue;
      const override = item.local ? undefined : overrides.values.get(name);
      // A real parameter mostly times something, which is set aside, so that it need have no value.
      const isNeeded = !isReal(item) || isKnown(value, scope);
      const given = override ?? (isNeeded ? evaluateConstant(value, scope) : undefined);
      const constant = given && (isReal(item) ? realOf(given) : typed(given, type));
      if (constant?.real !== undefined) body.hasReals = true;
      const none = isReal(item) ? REAL_VALUE : NO_VALUE;
      const index = constant === undefined ? none : scope.constants.push(constant) - 1;
      const { msb, lsb } = type?.range ?? { msb: (constant?.width ?? 1) - 1, lsb: 0 };
      scope.symbols.add({ name, kind: SymbolKind.Parameter, value: index, start, end, msb, lsb });
    }
  }
}

interface ParameterType {
  /** Undefined: the bits are numbered from 0, as many as the value has. */
  readonly range: Range | undefined;
  readonly signed: boolean;
}

function parameterType(item: ParameterItem, scope: BlockScope): ParameterType | undefined {
  if (item.type === 'integer') return { range: { msb: 31, lsb: 0 }, signed: true };
  if (item.type === 'time') return { range: { msb: 63, lsb: 0 }, signed: false };
  const range = item.range && evaluateRange(item.range, scope);
  if (range === undefined && !item.signed) return undefined;
  return { range, signed: item.signed };
}

function typed(constant: Constant, type: ParameterType | undefined): Constant {
  if (type === undefined) return constant;
  const { range, signed } = type;
  const width = range === undefined ? constant.width : Math.abs(range.msb - range.lsb) + 1;
  return converted(constant, width, signed);
}

function realOf(constant: Constant): Constant {
  return { ...constant, real: constant.real ?? numberOf(constant) ?? Number.NaN };
}

/** Whether all names in the value of a parameter have a meaning. */
function isKnown(value: Expression, scope: BlockScope): boolean {
  let isKnownSoFar = true;
  walk(value, (node) => {
    const part = node as Expression;
    if (part.kind === 'call') isKnownSoFar &&= isRealFunction(part, scope);
    if (part.kind !== 'name') return isKnownSoFar;
    const { path } = part;
    isKnownSoFar &&= scope.realOf(path[0]!) !== undefined || scope.resolve(path) !== undefined;
    return false;
  });
  return isKnownSoFar;
}

const isReal = (item: ParameterItem): boolean => item.type === 'real' || item.type === 'realtime';
