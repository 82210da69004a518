import type { Item, Module, Operation, Piece, Signal } from '../design/model.js';
import type { Choices } from './choices.js';

/** Operators whose value can stand inside of an expression. */
const isExpression = ({ operator }: Operation): boolean =>
  !['bitOf', 'bus', 'wiredAnd', 'wiredOr', 'pulledUp', 'pulledDown', 'constant'].includes(operator);

/** All pieces that an item reads. */
export function piecesOf(item: Item): readonly Piece[] {
  switch (item.kind) {
    case 'operation':
      return item.pieces;
    case 'register':
      return [item.data, item.enable, item.clear?.by].filter((piece) => piece !== undefined);
    case 'latch':
      return [item.data];
    case 'instance':
      return item.inputs;
  }
}

/**
 * Chooses operations that are written where their value is used: those used once, as a whole, by
 * something that takes an expression.
 */
export function chooseNested(module: Module, choices: Choices): Map<Signal, Operation> {
  const uses = new Map<Signal, number>();
  const needsName = new Set<Signal>();
  for (const item of module.items) {
    const takesAny = item.kind !== 'operation' || isExpression(item);
    for (const { signal, width } of piecesOf(item)) {
      uses.set(signal, (uses.get(signal) ?? 0) + 1);
      if (!takesAny || width !== signal.width) needsName.add(signal);
    }
  }
  const nested = new Map<Signal, Operation>();
  for (const item of module.items) {
    if (item.kind !== 'operation' || !isExpression(item) || item.target.isPort) continue;
    if (uses.get(item.target) !== 1 || needsName.has(item.target)) continue;
    if (choices.pick('nesting', 2) === 1) nested.set(item.target, item);
  }
  return nested;
}
