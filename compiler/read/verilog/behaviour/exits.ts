import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { Context, Exits } from './context.js';
import type { Logic } from './logic.js';

/** Stands among the names of blocks that are left for a whole `initial`, which nothing closes. */
export const LATER: NameId = -1;

/** The exits of one branch out of two: of the first where `condition` is 1. */
export function mergeExits(
  condition: NetId,
  whenTrue: Exits | undefined,
  whenFalse: Exits | undefined,
  logic: Logic,
): Exits | undefined {
  if (whenTrue === undefined && whenFalse === undefined) return undefined;
  const merged = new Map<NameId, NetId>();
  for (const name of new Set([...(whenTrue?.keys() ?? []), ...(whenFalse?.keys() ?? [])])) {
    const one = whenTrue?.get(name) ?? logic.zero;
    const zero = whenFalse?.get(name) ?? logic.zero;
    merged.set(name, logic.mux(condition, zero, one));
  }
  return merged;
}

/**
 * Executes statements in sequence, each only where none before it has left the block by `disable`.
 *
 * After a statement that may have left, the rest is executed in a branch of the store, so that a
 * loop's index stays constant within it.
 */
export class Sequence {
  readonly #context: Context;
  readonly #left: NetId[] = [];
  readonly #exits = new Map<NameId, NetId>();

  constructor(context: Context) {
    this.#context = context;
  }

  /** Takes note of the exits of the statement just executed; false if nothing follows it. */
  goesOn(exits: Exits | undefined): boolean {
    if (exits === undefined) return true;
    const { logic, store, scope } = this.#context;
    const still = logic.not(logic.any(this.#left));
    for (const [name, condition] of exits) {
      const before = this.#exits.get(name) ?? logic.zero;
      this.#exits.set(name, logic.or(before, logic.and(still, condition)));
    }
    const left = logic.any([...exits.values()]);
    if (logic.valueOf(left) === 1) return false;
    // What is read after it is looked for in all branches that are open.
    scope.shared.budget.spend(this.#left.length);
    store.enter();
    this.#left.push(left);
    return true;
  }

  /** Ends the sequence; returns its exits but those of the block `name`, which end here. */
  close(name: NameId = 0): Exits | undefined {
    const { store } = this.#context;
    for (const left of this.#left.reverse()) {
      store.apply(store.merge(left, undefined, store.leave()));
    }
    this.#exits.delete(name);
    return this.#exits.size === 0 ? undefined : this.#exits;
  }
}
