import type { NameId } from '../../names.js';
import type { Unusable } from '../scope.js';
import type { DeclarationItem, Item } from '../syntax.js';
import { OtherName, REAL_VALUE, SymbolKind, type SymbolTable } from './symbols.js';

/** Why a name of a scope has no meaning though it is declared; undefined if it is not. */
export function unusableName(
  { symbols, pending }: { readonly symbols: SymbolTable; readonly pending: readonly Item[] },
  name: NameId,
): Unusable | undefined {
  const symbol = symbols.find(name);
  return symbol < 0 ? pendingName(pending, name) : knownName(symbols, symbol);
}

function knownName(symbols: SymbolTable, symbol: number): Unusable | undefined {
  const value = symbols.value(symbol);
  switch (symbols.kind(symbol)) {
    case SymbolKind.Parameter:
      return value === REAL_VALUE ? 'real' : 'faulty';
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
