import type { NetId } from '../../../circuit/ids.js';
import type { Binding } from '../scope.js';
import type { Expression } from '../syntax.js';
import type { Context } from './context.js';
import { forEachName, plainMeaningOf } from './names.js';

/** All nets of the signals that a part of the syntax tree names. */
export function netsNamed(tree: unknown, context: Context): Set<NetId> {
  const nets = new Set<NetId>();
  forEachName(tree, (expression: Extract<Expression, { kind: 'name' }>) => {
    for (const net of netsOf(plainMeaningOf(expression, context))) nets.add(net);
  });
  return nets;
}

/** The nets of a signal or an array of variables. */
export function netsOf(binding: Binding | undefined): readonly NetId[] {
  if (binding?.kind === 'signal') return binding.nets;
  return binding?.kind === 'memory' ? binding.words.flat() : [];
}
