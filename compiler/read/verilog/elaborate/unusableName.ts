import type { NameId } from '../../names.js';
import type { Constant, Unusable } from '../scope.js';
import type { DeclarationItem, Item } from '../syntax.js';
import { OtherName, REAL_VALUE, SymbolKind, type SymbolTable } from './symbols.js';

/** Why a name of a scope has no meaning though it is declared; undefined if it is not. */
export function unusableName(names: Names, name: NameId): Unusable | undefined {
  const symbol = names.symbols.find(name);
  return symbol < 0 ? pendingName(names.pending, name) : knownName(names, symbol);
}

/** The names of a scope and what they stand for. */
interface Names {
  readonly symbols: SymbolTable;
  readonly constants: readonly Constant[];
  readonly pending: readonly Item[];
}

/** The value of a symbol that is a real parameter; undefined for any other. */
export function realParameter(
  { symbols, constants }: Omit<Names, 'pending'>,
  symbol: number,
): number | undefined {
  if (symbols.kind(symbol) !== SymbolKind.Parameter) return undefined;
  return constants[symbols.value(symbol)]?.real;
}

/** Whether a number has no bits. */
export const isFraction = (real: number | undefined): boolean =>
  real !== undefined && !Number.isInteger(real);

function knownName(names: Names, symbol: number): Unusable | undefined {
  const { symbols } = names;
  const value = symbols.value(symbol);
  switch (symbols.kind(symbol)) {
    case SymbolKind.Parameter:
      return value === REAL_VALUE || isFraction(realParameter(names, symbol)) ? 'real' : 'faulty';
    case SymbolKind.Genvar:
      return 'genvar';
    case SymbolKind.Block:
      return 'block';
    case SymbolKind.Instance:
      return 'instance';
    case SymbolKind.Other:
      return otherName(value);
    default:
      return undefined;
  }
}

function otherName(value: number): Unusable {
  if (value === OtherName.Real) return 'real';
  if (value === OtherName.Event) return 'event';
  return value === OtherName.Block ? 'block' : 'faulty';
}

function pendingName(items: readonly Item[], name: NameId): Unusable | undefined {
  for (const item of items) {
    if (item.kind === 'declaration') {
      for (const declared of item.names) if (declared.name === name) return typeName(item);
    } else if (item.kind === 'parameter') {
      if (item.values.some((declared) => declared.name === name)) return 'later';
    }
  }
  return undefined;
}

function typeName({ type }: DeclarationItem): Unusable {
  if (type === 'real' || type === 'realtime') return 'real';
  return type === 'event' || type === 'genvar' ? type : 'signal';
}
