import type { NetId } from '../../../circuit/ids.js';
import { X } from '../../../circuit/values.js';
import type { Scope } from '../scope.js';
import type { Item } from '../syntax.js';
import { writeContents } from './heldMemory.js';
import { powerUpContext } from './process.js';

/**
 * Executes an `initial` whose assignments are constants, and adds what it leaves in variables to
 * `scope.shared.initialValues`. Bits left at x get no value. What follows a delay or an event
 * control happens later than power-up; it is left out with a warning.
 */
export function lowerInitial(item: Extract<Item, { kind: 'initial' }>, scope: Scope): void {
  const { initialValues, budget } = scope.shared;
  budget.begin(item);
  const context = powerUpContext(scope, (net) => initialValues.get(net) ?? X);
  context.services.execute(item.body, context);
  const { store, logic } = context;
  for (const [key, entry] of store.finish()) {
    if (key < 0 || store.loopIndexes.has(key)) continue;
    setInitial(key, logic.valueOf(store.resolve(key, entry)), initialValues);
  }
  writeContents(store.finishWords(), logic);
}

function setInitial(key: NetId, value: number | undefined, initialValues: Map<NetId, 0 | 1>): void {
  if (value === 0 || value === 1) initialValues.set(key, value);
  else initialValues.delete(key);
}
